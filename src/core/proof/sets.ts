/** Disjoint sets with path halving, union by lower number: Tarjan & van Leeuwen, J. ACM 31 (1984) 245. */
export interface Sets {
  /** Lowest member of the set that holds `i`: the same whatever the order of joining. */
  find(i: number): number;
  join(i: number, j: number): void;
}

export function sets(count: number): Sets {
  const parent = new Int32Array(count);
  for (let i = 0; i < count; i++) parent[i] = i;
  const find = (i: number): number => {
    while (parent[i] !== i) {
      parent[i] = parent[parent[i]];
      i = parent[i];
    }
    return i;
  };
  return {
    find,
    join(i, j) {
      const a = find(i);
      const b = find(j);
      if (a < b) parent[b] = a;
      else parent[a] = b;
    },
  };
}
