/**
 * Repeatable random numbers in [0, 1): mulberry32 (Tommy Ettinger, public domain, 2017).
 * Same seed, same numbers, on every machine. Not for secrets.
 */
export function randomFrom(seed: number): () => number {
  let a = seed >>> 0;
  return () => {
    a = (a + 0x6d2b79f5) >>> 0;
    let t = a;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}
