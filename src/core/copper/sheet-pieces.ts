/** Pieces of a sheet: what edges join, with a pad as one conductor. */
import { PairMap } from '../base/pair-map.ts';
import type { NetSheet } from './net-sheet.ts';

export interface SheetPiece {
  /** Triangles outside pads. */
  triangles: number[];
  /** Pads, as `NetSheet.pad` names them, ascending. */
  pads: number[];
}

/** @returns pieces in the order of their first triangles, and the pad along an edge between two vertices, -1 for none */
export function sheetPieces(sheet: NetSheet): {
  pieces: SheetPiece[];
  padAt: (a: number, b: number) => number;
} {
  const { triangles, pad } = sheet;
  const count = pad.length;
  // Nodes: triangles, then pads.
  const pads = [...new Set(sheet.padOf)].filter((p) => p >= 0).sort((a, b) => a - b);
  const nodeOf = new Map(pads.map((p, i) => [p, count + i]));
  const parent = Int32Array.from({ length: count + pads.length }, (_, i) => i);
  const find = (i: number): number => {
    while (parent[i] !== i) i = parent[i] = parent[parent[i]];
    return i;
  };
  const join = (a: number, b: number): void => {
    const [p, q] = [find(a), find(b)];
    parent[Math.max(p, q)] = Math.min(p, q);
  };
  const edges = new PairMap(triangles.length);
  const held = new PairMap();
  triangles.forEach((v, c) => {
    const t = (c / 3) | 0;
    const w = triangles[c % 3 === 2 ? c - 2 : c + 1];
    const [a, b] = [Math.min(v, w), Math.max(v, w)];
    const other = edges.get(a, b, -1);
    if (other < 0) edges.set(a, b, t);
    else join(t, other);
    if (pad[t] < 0) return;
    held.set(a, b, pad[t]);
    join(t, nodeOf.get(pad[t])!);
  });
  const pieces = new Map<number, SheetPiece>();
  const pieceOf = (node: number): SheetPiece => {
    const root = find(node);
    let piece = pieces.get(root);
    if (!piece) {
      piece = { triangles: [], pads: [] };
      pieces.set(root, piece);
    }
    return piece;
  };
  for (let t = 0; t < count; t++) {
    const piece = pieceOf(t);
    if (pad[t] < 0) piece.triangles.push(t);
  }
  for (const p of pads) pieceOf(nodeOf.get(p)!).pads.push(p);
  return {
    pieces: [...pieces.values()],
    padAt: (a, b) => held.get(Math.min(a, b), Math.max(a, b), -1),
  };
}
