/** Nets as they lie, for the window: one after the other, so that the work can be stopped between two of them. */
import type { RunContext } from '../core/base/run-context.ts';
import { netReports } from '../core/copper/nets.ts';
import type { Copper } from '../core/drape/copper.ts';
import type { Project } from '../core/project/schema.ts';
import type { NetPicture } from './pictures.ts';

/** @returns one a net, in the order of first appearance; elements without a net are left out */
export function netPictures(project: Project, copper: Copper, ctx: RunContext): NetPicture[] {
  const names = [...new Set(copper.elements.map((e) => e.net).filter((n) => n !== ''))];
  return names.flatMap((name, i) => {
    ctx.step('reach', i, names.length);
    const own = { elements: copper.elements.filter((e) => e.net === name) };
    return netReports(project, own, { step: () => ctx.step('reach', i, names.length) }).map((report) => ({
      name: report.name,
      pieces: report.pieces,
      area: report.area,
      most: report.resistance_mohm.reduce<NetPicture['most']>(
        (most, { from, to, value }) => (most && most.value >= value ? most : { from, to, value }),
        null,
      ),
      current: report.current_A,
    }));
  });
}
