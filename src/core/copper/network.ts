/**
 * Resistance between two nodes of a network: Kirchhoff's laws as the weighted graph Laplacian, solved by Gaussian
 * elimination with pivoting (any text on linear circuits; the networks here have tens of nodes).
 */

export interface Link {
  a: number;
  b: number;
  ohm: number;
}

/**
 * @param same  pairs of nodes that are one
 * @returns resistance in the links' unit; 0 when both are one node; null when nothing joins them
 */
export function solveResistance(
  nodes: number,
  links: readonly Link[],
  same: readonly (readonly [number, number])[],
  from: number,
  to: number,
): number | null {
  const parent = Array.from({ length: nodes }, (_, i) => i);
  const find = (i: number): number => {
    while (parent[i] !== i) i = parent[i] = parent[parent[i]];
    return i;
  };
  for (const [a, b] of same) parent[find(a)] = find(b);
  for (const l of links) if (l.ohm <= 0) parent[find(l.a)] = find(l.b);
  const s = find(from);
  const t = find(to);
  if (s === t) return 0;
  const live = links.filter((l) => find(l.a) !== find(l.b));
  // Only what is joined to the source takes part; elsewhere the Laplacian is singular.
  const reached = new Set([s]);
  for (let grew = true; grew; ) {
    grew = false;
    for (const l of live) {
      const [a, b] = [find(l.a), find(l.b)];
      if (reached.has(a) !== reached.has(b)) {
        reached.add(a).add(b);
        grew = true;
      }
    }
  }
  if (!reached.has(t)) return null;
  const index = new Map([...reached].filter((v) => v !== t).map((v, i) => [v, i]));
  const n = index.size;
  const m = Array.from({ length: n }, () => new Float64Array(n + 1));
  for (const l of live) {
    const [a, b] = [index.get(find(l.a)), index.get(find(l.b))];
    if (!reached.has(find(l.a))) continue;
    const g = 1 / l.ohm;
    if (a !== undefined) m[a][a] += g;
    if (b !== undefined) m[b][b] += g;
    if (a !== undefined && b !== undefined) {
      m[a][b] -= g;
      m[b][a] -= g;
    }
  }
  m[index.get(s)!][n] = 1;
  for (let k = 0; k < n; k++) {
    let p = k;
    for (let i = k + 1; i < n; i++) if (Math.abs(m[i][k]) > Math.abs(m[p][k])) p = i;
    [m[k], m[p]] = [m[p], m[k]];
    for (let i = 0; i < n; i++) {
      if (i === k || m[i][k] === 0) continue;
      const f = m[i][k] / m[k][k];
      for (let j = k; j <= n; j++) m[i][j] -= f * m[k][j];
    }
  }
  const row = index.get(s)!;
  return m[row][n] / m[row][row];
}
