/** What must hold for every surface after `buildMesh`; a broken line here is a fault of ours. */
import { faceOf, next, type SurfaceMesh } from './surface-mesh.ts';

/** @returns one sentence a broken rule and place, at most 20; empty when all is well */
export function checkMesh(mesh: SurfaceMesh): string[] {
  const out: string[] = [];
  const say = (s: string): void => {
    if (out.length < 20) out.push(s);
  };
  const { positions, triangles, twin, pieceOf, pieces } = mesh;
  const vertices = positions.length / 3;
  const faces = triangles.length / 3;
  if (twin.length !== triangles.length) say(`${twin.length} twins for ${triangles.length} half-edges`);
  if (pieceOf.length !== faces || mesh.facetOfFace.length !== faces)
    say('arrays of one number a face differ in length');
  const used = new Uint8Array(vertices);
  const inPiece = new Array<number>(pieces.length).fill(0);
  const openPiece = new Array<boolean>(pieces.length).fill(false);
  for (let i = 0; i < positions.length; i++)
    if (!Number.isFinite(positions[i])) say(`vertex ${(i / 3) | 0} is not finite`);
  for (let f = 0; f < faces; f++) {
    const [a, b, c] = [triangles[3 * f], triangles[3 * f + 1], triangles[3 * f + 2]];
    if (a >= vertices || b >= vertices || c >= vertices) {
      say(`face ${f} names a vertex that is not there`);
      continue;
    }
    used[a] = used[b] = used[c] = 1;
    if (a === b || b === c || c === a) say(`face ${f} has two equal corners`);
    if (pieceOf[f] < 0 || pieceOf[f] >= pieces.length) say(`face ${f} is in no piece`);
    else inPiece[pieceOf[f]]++;
    // A facet that was split names the first of its faces.
    if (!(mesh.faceOfFacet[mesh.facetOfFace[f]] >= 0 && mesh.faceOfFacet[mesh.facetOfFace[f]] <= f))
      say(`face ${f} is of a facet that names no face, or a later one`);
  }
  mesh.faceOfFacet.forEach((f, facet) => {
    if (f >= 0 && mesh.facetOfFace[f] !== facet) say(`facet ${facet} names a face of another facet`);
  });
  for (let h = 0; h < twin.length; h++) {
    const t = twin[h];
    if (t === -1) {
      openPiece[pieceOf[faceOf(h)]] = true;
      continue;
    }
    if (t < 0 || t >= twin.length) say(`half-edge ${h} has a twin that is not there`);
    else if (twin[t] !== h) say(`half-edge ${h} is not the twin of its twin`);
    else if (faceOf(t) === faceOf(h)) say(`half-edge ${h} is twinned inside its own face`);
    else if (triangles[h] !== triangles[next(t)] || triangles[next(h)] !== triangles[t])
      say(`half-edges ${h} and ${t} do not run opposite ways along one edge`);
    else if (pieceOf[faceOf(t)] !== pieceOf[faceOf(h)])
      say(`half-edges ${h} and ${t} are in different pieces`);
  }
  for (let v = 0; v < vertices; v++) if (!used[v]) say(`vertex ${v} is in no face`);
  pieces.forEach((p, i) => {
    if (p.faces !== inPiece[i]) say(`piece ${i} counts ${p.faces} faces and has ${inPiece[i]}`);
    if (p.closed === openPiece[i]) say(`piece ${i} says ${p.closed ? 'closed' : 'open'} and is not`);
    if (!p.closed && p.volume !== 0) say(`open piece ${i} has a volume`);
  });
  return out;
}
