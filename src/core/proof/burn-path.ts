/**
 * What a scan file makes the machine do, whatever its format: one entry a point, in the order it is driven.
 * Coordinates are field commands, mm, +Y up.
 */
export interface BurnPath {
  /** As the report names it, for messages. */
  file: string;
  x: Float64Array;
  y: Float64Array;
  /** 1 when the move that ends at this point burns, 0 when it jumps. */
  mark: Uint8Array;
  /** mm/s of the move that ends here; 0 on a jump. */
  speed: Float64Array;
  /** Share of the average power of the move that ends here; 0 on a jump. */
  power: Float64Array;
}

/** Collects points into growing flat arrays: a file may hold millions. */
export function burnPathBuilder(file: string) {
  let size = 1024;
  let n = 0;
  let x = new Float64Array(size);
  let y = new Float64Array(size);
  let mark = new Uint8Array(size);
  let speed = new Float64Array(size);
  let power = new Float64Array(size);
  return {
    add(px: number, py: number, burns: boolean, mmPerSecond: number, share: number): void {
      if (n === size) {
        size *= 2;
        x = grown(x, size);
        y = grown(y, size);
        speed = grown(speed, size);
        power = grown(power, size);
        const wider = new Uint8Array(size);
        wider.set(mark);
        mark = wider;
      }
      x[n] = px;
      y[n] = py;
      mark[n] = burns ? 1 : 0;
      speed[n] = burns ? mmPerSecond : 0;
      power[n++] = burns ? share : 0;
    },
    done: (): BurnPath => ({
      file,
      x: x.slice(0, n),
      y: y.slice(0, n),
      mark: mark.slice(0, n),
      speed: speed.slice(0, n),
      power: power.slice(0, n),
    }),
  };
}

function grown(from: Float64Array<ArrayBuffer>, size: number): Float64Array<ArrayBuffer> {
  const to = new Float64Array(size);
  to.set(from);
  return to;
}
