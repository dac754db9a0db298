import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import { band } from '../../../src/core/drape/band.ts';
import { lengthen } from '../../../src/core/drape/lengthen.ts';
import { joinRoute, type Route } from '../../../src/core/drape/route.ts';
import { type Strip, stripDistance, stripHatch, stripReach } from '../../../src/core/drape/strip.ts';
import { WindowSolver } from '../../../src/core/geodesic/windows.ts';
import { placeAt, plate } from '../helpers/surfaces.ts';

describe('fields of strips on a plane', () => {
  it.each(
    (['round', 'square', 'butt'] as const).flatMap((ends) =>
      (['round', 'miter'] as const).map((bends) => [ends, bends] as const),
    ),
  )(
    '%s ends, %s bends: distance and hatch grow by no more than the way walked, seeds 1 to 40',
    (ends, bends) => {
      const mesh = plate(20, 20, 5, 3);
      let pairs = 0;
      for (let seed = 1; seed <= 40; seed++) {
        const random = randomFrom(seed);
        const half = 0.1 + 0.2 * random();
        // One bend to either side, up to 160°: past 151° a mitre is bevelled. Legs that keep clear of each other's ends.
        const [x, y, way] = [-3 + random(), -2 + random(), random()];
        const [one, two] = [4 + random(), 4 + random()];
        const degrees = seed % 3 === 0 ? 152 + 8 * random() : 150 * random();
        const bend = ((random() < 0.5 ? -1 : 1) * degrees * Math.PI) / 180;
        const corner = [x + one * Math.cos(way), y + one * Math.sin(way)];
        const route = [
          [x, y],
          corner,
          [corner[0] + two * Math.cos(way + bend), corner[1] + two * Math.sin(way + bend)],
        ];
        const solver = new WindowSolver(mesh);
        const { path, stops } = joinRoute(
          solver,
          route.map(([a, b]) => placeAt(mesh, [a, b, 0])),
        ) as Route;
        const strip: Strip = { half, ends, bends, length: path.length };
        const longer = ends === 'square' ? lengthen(mesh, path, half) : { path, lead: 0, pieces: 0 };
        const reach = 3 * half;
        const field = band(solver, longer.path, {
          left: reach,
          right: reach,
          stops: stops.map((i) => i + longer.pieces),
          start: -longer.lead,
          bendReach: (turn) => stripReach(strip, turn) + reach,
        });
        const bent = field.bends.map((b) => ({ ...b, curvature: 0 }));
        const look = (p: readonly [number, number]) => {
          const { face } = placeAt(mesh, [p[0], p[1], 0]).surface;
          const at = field.at(face, [p[0], p[1], 0]);
          if (!at || at.distance > reach) return null;
          return { at, distance: stripDistance(strip, at, bent), hatch: stripHatch(strip, at, bent) };
        };
        for (let k = 0; k < 400; k++) {
          const near = route[Math.floor(random() * 3)];
          const p = [near[0] + (random() - 0.5) * 3 * half, near[1] + (random() - 0.5) * 3 * half] as const;
          const step = 0.2 * half * random();
          const turn = 2 * Math.PI * random();
          const q = [p[0] + step * Math.cos(turn), p[1] + step * Math.sin(turn)] as const;
          const [a, b] = [look(p), look(q)];
          if (!a || !b) continue;
          expect(Math.abs(a.distance - b.distance)).toBeLessThanOrEqual(step + 1e-5);
          expect(Math.abs(Math.abs(a.hatch) - Math.abs(b.hatch))).toBeLessThanOrEqual(step + 1e-5);
          pairs++;
        }
      }
      expect(pairs).toBeGreaterThan(5000);
    },
  );
});
