/** Nets as they lie on the part: what touches, how much copper, and the resistance between its pads (model.md §8). */
import { quiet, type RunContext } from '../base/run-context.ts';
import type { Copper, CopperElement } from '../drape/copper.ts';
import type { NetReport } from '../project/report.ts';
import type { Project } from '../project/schema.ts';
import { guideCurrent, stripResistance } from './conduct.ts';
import { IntrinsicMesh } from './intrinsic.ts';
import { netSheet } from './net-sheet.ts';
import { type SheetPiece, sheetPieces } from './sheet-pieces.ts';
import { type SheetResistance, sheetResistance } from './sheet-solve.ts';
import { unionArea } from './union-area.ts';

/**
 * @returns one a net, in the order of first appearance; elements without a net are left out.
 * Traces and regions conduct with the shape that they have on the part, all of a net as one sheet; a pad counts as soldered,
 * one potential all over. The area is that of all copper of the net together, each place counted once, and the length that
 * of all its traces.
 * The current is what the guide allows for the narrowest place that current from pad to pad has to pass; where no two pads
 * are joined, for the narrowest trace.
 * @throws Cancelled by `ctx`, which is asked before each net and each refinement
 */
export function netReports(project: Project, copper: Copper, ctx: RunContext = quiet): NetReport[] {
  const names = [...new Set(copper.elements.map((e) => e.net).filter((n) => n !== ''))];
  return names.map((name, i) => {
    const step = (): void => ctx.step('reach', i, names.length);
    step();
    const elements = copper.elements.filter((e) => e.net === name);
    const { pieces, pairs } = padPairs(elements, step);
    const traces = elements.filter((e) => e.kind === 'trace');
    // A square of the sheet: a strip as long as it is wide.
    const square = stripResistance(1, 1, project.copper);
    const widths = pairs.flatMap((p) => (p.squares > 0 ? [p.narrowest] : []));
    const narrowest = Math.min(...(widths.length > 0 ? widths : traces.map((e) => e.width)));
    return {
      name,
      pieces,
      area: unionArea(elements.map((e) => e.copper)),
      length: traces.reduce((sum, e) => sum + e.length, 0),
      resistance_mohm: pairs.map(({ from, to, squares, within }) => ({
        from: elements[from].id,
        to: elements[to].id,
        value: squares * square,
        within: within * square,
      })),
      current_A: Number.isFinite(narrowest) ? guideCurrent(narrowest, project.copper) : 0,
    };
  });
}

interface PadPair extends SheetResistance {
  /** Indices into the elements. */
  from: number;
  to: number;
}

/** Resistances between pads: every pad from the first one of its piece. */
function padPairs(
  elements: readonly CopperElement[],
  step: () => void,
): { pieces: number; pairs: PadPair[] } {
  const sheet = netSheet(elements);
  const { pieces, padAt } = sheetPieces(sheet);
  const solved = pieces.map((piece) => ({
    piece,
    found: piece.pads.length > 1 ? solvePiece(sheet, piece, padAt, step) : [],
  }));
  const firsts = new Map<SheetPiece, number>();
  const pairs: PadPair[] = [];
  elements.forEach((e, to) => {
    if (e.kind !== 'pad') return;
    const { piece, found } = solved.find((s) => s.piece.pads.includes(sheet.padOf[to]))!;
    const from = firsts.get(piece);
    if (from === undefined) {
      firsts.set(piece, to);
      return;
    }
    // The first pad of a piece is the first of its pads that touch, and so electrode 0.
    const electrode = piece.pads.indexOf(sheet.padOf[to]);
    pairs.push({
      from,
      to,
      ...(electrode === 0 ? { squares: 0, within: 0, narrowest: Infinity } : found[electrode - 1]),
    });
  });
  return { pieces: pieces.length, pairs };
}

function solvePiece(
  { positions, triangles }: { positions: Float64Array; triangles: Uint32Array },
  { triangles: free, pads }: SheetPiece,
  padAt: (a: number, b: number) => number,
  step: () => void,
): SheetResistance[] {
  const corners = free.flatMap((t) => [triangles[3 * t], triangles[3 * t + 1], triangles[3 * t + 2]]);
  const mesh = new IntrinsicMesh(positions, corners, (a, b) => pads.indexOf(padAt(a, b)));
  return sheetResistance(mesh, pads.length, step);
}
