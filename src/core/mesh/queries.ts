/** Ray and nearest-point queries on a surface. The only room that knows three-mesh-bvh. */
import type { Vec3 } from '../base/vec.ts';

export interface NearestHit {
  point: Vec3;
  face: number;
  distance: number;
}

export interface RayHit {
  point: Vec3;
  face: number;
  distance: number;
}

export interface SurfaceQueries {
  /**
   * Surface point nearest to `p`, or null when none lies within `within` mm.
   * Equal distances go to the lowest face number, so that the answer never depends on the tree.
   */
  nearest(p: Vec3, within?: number): NearestHit | null;
  /** First face met by the ray from `origin` along the unit `direction`, from either side; null when none within `far` mm. */
  firstHit(origin: Vec3, direction: Vec3, far?: number): RayHit | null;
  /** Whether anything stands on the segment: quicker than `firstHit`. */
  blocked(origin: Vec3, direction: Vec3, far?: number): boolean;
}
