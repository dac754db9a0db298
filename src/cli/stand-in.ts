/** Stands in for the pipeline until it lands. */
import type { RunContext } from '../core/base/run-context.ts';
import { type OutputFile, textFile } from '../core/files/output.ts';
import { buildMesh, MM_PER_UNIT } from '../core/mesh/build.ts';
import { readStl } from '../core/mesh/stl.ts';
import { partReport } from '../core/mesh/summary.ts';
import type { Report } from '../core/project/report.ts';
import type { Project } from '../core/project/schema.ts';
import type { Workers } from '../worker/pool.ts';

export async function runJob(
  input: {
    project: Project;
    projectFile: string;
    projectText: string;
    part: { file: string; bytes: Uint8Array };
  },
  options: { seed: number; stopAfter?: 'reach' },
  ctx: RunContext,
  _workers: Workers,
): Promise<{ report: Report; files: OutputFile[] }> {
  const mesh = buildMesh(
    readStl(input.part.bytes, input.part.file, ctx),
    MM_PER_UNIT[input.project.part.units],
    ctx,
    input.part.file,
  );
  const report: Report = {
    format: 'beamdrape-report',
    version: 1,
    project: input.project.name,
    ok: true,
    unknownFields: [],
    part: partReport(mesh),
    beam: {
      waistRadius_um: 50,
      rayleighRange: 10,
      pulseEnergy_uJ: 30,
      peakPower_kW: 3,
      halfDepth: 2,
      truncated: false,
    },
    elements: [],
    rules: [],
    setups: [],
    unreached: { length: 0, elements: [] },
    collisions: [],
    nets: [],
    plating: { area_dm2: 0, load: 0, copper_g: 0, formaldehyde_g: 0, naoh_g: 0, time_min: 0 },
    proof: null,
  };
  return {
    report,
    files: options.stopAfter
      ? []
      : [textFile('report.json', '{}'), textFile('sheet.html', '<!doctype html>')],
  };
}
