/** Paths under the pointer's hand: each goes on from where it was, so that it keeps its side of holes while it is dragged. */
import type { Vec3 } from '../core/base/vec.ts';
import { followWith, type GeodesicPath, shortestWith, tautWith } from '../core/geodesic/shortest.ts';
import { waypoints } from '../core/geodesic/waypoints.ts';
import type { WindowSolver } from '../core/geodesic/windows.ts';
import type { SurfacePoint } from '../core/mesh/surface-point.ts';

/** Which path is held: one hand, and a name for each of its paths. */
export interface Hold {
  hand: string;
  name: string;
  /** Where the dragged end was before, for the first step. */
  was?: Vec3;
}

/** The shortest way through this many faces takes a few ms. */
const AT_ONCE = 120;

export class HeldPaths {
  private hand = '';
  private readonly paths = new Map<string, GeodesicPath>();
  private readonly solver: WindowSolver;
  private readonly place: (p: Vec3) => SurfacePoint;

  constructor(solver: WindowSolver, place: (p: Vec3) => SurfacePoint) {
    this.solver = solver;
    this.place = place;
  }

  /** The held path with its ends moved, or the shortest where that cannot be made; another hand lets go of what was held before. */
  follow(hold: Hold, from: SurfacePoint, to: SurfacePoint): GeodesicPath | null {
    let old = this.held(hold);
    if (!old && hold.was) old = shortestWith(this.solver, from, this.place(hold.was));
    return this.keep(
      hold,
      (old && followWith(this.solver, old, from, to)) ?? shortestWith(this.solver, from, to),
    );
  }

  /** The shortest path if it can be had at once, else the held one with its ends moved, not `sure` to be the shortest. */
  glance(hold: Hold, from: SurfacePoint, to: SurfacePoint): { path: GeodesicPath | null; sure: boolean } {
    const old = this.held(hold);
    const quick = (old && followWith(this.solver, old, from, to)) ?? tautWith(this.solver, from, to);
    const sure = quick === null || quick.faces.length <= AT_ONCE;
    return { path: this.keep(hold, quick && sure ? shortestWith(this.solver, from, to) : quick), sure };
  }

  private held(hold: Hold): GeodesicPath | null {
    if (hold.hand !== this.hand) {
      this.hand = hold.hand;
      this.paths.clear();
    }
    return this.paths.get(hold.name) ?? null;
  }

  private keep(hold: Hold, path: GeodesicPath | null): GeodesicPath | null {
    if (path) this.paths.set(hold.name, path);
    else this.paths.delete(hold.name);
    return path;
  }

  /** Places that hold the path when shortest ways are laid between them; none where it is the shortest. */
  pins(hold: Hold): { face: number; point: Vec3 }[] {
    const path = hold.hand === this.hand ? this.paths.get(hold.name) : undefined;
    return path ? waypoints(this.solver, path) : [];
  }
}
