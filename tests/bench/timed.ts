/** Processor time of this process, ms: what else runs on the machine does not count. */
export function timed<T>(work: () => T): [T, number] {
  const start = process.cpuUsage();
  const result = work();
  const used = process.cpuUsage(start);
  return [result, (used.user + used.system) / 1000];
}

export const median = (values: number[]): number => values.sort((a, b) => a - b)[values.length >> 1];
