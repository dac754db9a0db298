/** The three.js scene: part, copper, field square, focal plane, lens body. Draws what it is told, when it is told. */
import {
  BufferAttribute,
  BufferGeometry,
  Color,
  CylinderGeometry,
  DoubleSide,
  EdgesGeometry,
  Group,
  LineBasicMaterial,
  LineSegments,
  Matrix4,
  Mesh,
  MeshBasicMaterial,
  OrthographicCamera,
  PlaneGeometry,
  Quaternion,
  Scene,
  Vector3,
  WebGLRenderer,
} from 'three';
import { LineMaterial } from 'three/addons/lines/LineMaterial.js';
import { LineSegments2 } from 'three/addons/lines/LineSegments2.js';
import { LineSegmentsGeometry } from 'three/addons/lines/LineSegmentsGeometry.js';
import type { Vec3 } from '../core/base/vec.ts';
import type { Head, Setup } from '../core/project/schema.ts';
import type {
  CopperPicture,
  ElementPicture,
  PartPicture,
  PlanPicture,
  ReachPicture,
} from '../worker/pictures.ts';
import { axesOf, type Eye } from './eye.ts';
import { copperMaterial, partMaterial, surfaceLineMaterial } from './materials.ts';
import { LOOKS, type Scheme } from './palette.ts';

/** Distance of the eye, mm: beyond any lens body. A parallel projection looks the same from everywhere. */
const FAR = 2000;

export function createScene(canvas: HTMLCanvasElement) {
  const renderer = new WebGLRenderer({ canvas, antialias: true, powerPreference: 'high-performance' });
  renderer.autoClear = true;
  let size = { width: 0, height: 0, pixels: 0 };
  const scene = new Scene();
  const camera = new OrthographicCamera(-1, 1, 1, -1, 1, 2 * FAR);
  const partMat = partMaterial();
  const copperMat = copperMaterial();
  const edgeMat = new LineBasicMaterial({ transparent: true, opacity: 0.55 });
  const part = new Group();
  part.matrixAutoUpdate = false;
  const partMesh = new Mesh(new BufferGeometry(), partMat);
  const partEdges = new LineSegments(new BufferGeometry(), edgeMat);
  const copperMesh = new Mesh(new BufferGeometry(), copperMat);
  const fat = (width: number, depthTest = true) =>
    new LineMaterial({
      linewidth: width,
      depthTest,
      polygonOffset: true,
      polygonOffsetFactor: 0,
      polygonOffsetUnits: -2500,
    });
  const rimMat = surfaceLineMaterial();
  const outlines = new LineSegments(new BufferGeometry(), rimMat);
  const doseLines = new LineSegments2(new LineSegmentsGeometry(), fat(3));
  const holes = new LineSegments2(new LineSegmentsGeometry(), fat(2));
  const chosen = new LineSegments2(new LineSegmentsGeometry(), fat(3));
  const pointed = new LineSegments2(new LineSegmentsGeometry(), fat(3));
  const live = new LineSegments2(new LineSegmentsGeometry(), fat(3.5));
  const beam = new LineSegments2(new LineSegmentsGeometry(), fat(1.5));
  (doseLines.material as LineMaterial).color = new Color(LOOKS.dose.mark);
  for (const o of [partMesh, partEdges, copperMesh, outlines, doseLines, holes, chosen, pointed, live]) {
    o.frustumCulled = false;
    part.add(o);
  }
  scene.add(part);

  // The bench: everything that goes with the focal plane hangs in one group, at the height in focus.
  const bench = new Group();
  const squareMat = new LineBasicMaterial();
  const square = new LineSegments(new BufferGeometry(), squareMat);
  const planeMat = new MeshBasicMaterial({
    transparent: true,
    opacity: 0.09,
    side: DoubleSide,
    depthWrite: false,
  });
  const plane = new Mesh(new PlaneGeometry(1, 1), planeMat);
  const lensMat = new LineBasicMaterial({ transparent: true, opacity: 0.9 });
  const lens = new LineSegments(new BufferGeometry(), lensMat);
  const glassMat = new MeshBasicMaterial({
    transparent: true,
    opacity: 0.12,
    side: DoubleSide,
    depthWrite: false,
  });
  const glass = new Mesh(new BufferGeometry(), glassMat);
  bench.add(square, plane, lens, glass);
  scene.add(bench, beam);
  beam.frustumCulled = false;

  const geometryOf = (positions: Float32Array, normals: Float32Array | null) => {
    const g = new BufferGeometry();
    g.setAttribute('position', new BufferAttribute(positions, 3));
    if (normals) g.setAttribute('normal', new BufferAttribute(normals, 3));
    return g;
  };

  function setSegments(lines: LineSegments2, flat: Float32Array): void {
    lines.geometry.dispose();
    lines.geometry = new LineSegmentsGeometry();
    lines.visible = flat.length >= 6;
    if (lines.visible) lines.geometry.setPositions(flat);
  }

  function setRims(flat: Float32Array): void {
    outlines.geometry.dispose();
    outlines.geometry = geometryOf(flat, null);
    outlines.visible = flat.length >= 6;
  }

  function setPart(picture: PartPicture | null): void {
    partMesh.geometry.dispose();
    partEdges.geometry.dispose();
    partMesh.geometry = picture ? geometryOf(picture.positions, picture.normals) : new BufferGeometry();
    partEdges.geometry = picture ? geometryOf(picture.edges, null) : new BufferGeometry();
    partMesh.visible = partEdges.visible = picture !== null;
  }

  function setCopper(copper: CopperPicture | null, setup: number): void {
    copperMesh.geometry.dispose();
    copperMesh.visible = copper !== null && copper.area.length > 0;
    if (!copper) {
      setRims(new Float32Array(0));
      setSegments(doseLines, new Float32Array(0));
      setSegments(holes, new Float32Array(0));
      return;
    }
    const g = geometryOf(copper.positions, copper.normals);
    g.setIndex(new BufferAttribute(copper.corners, 1));
    const n = copper.positions.length / 3;
    g.setAttribute('aHeight', new BufferAttribute(copper.heights[setup] ?? copper.heights[0]!, 1));
    for (const name of ['aUsable', 'aFails', 'aLayer', 'aStretch'])
      g.setAttribute(name, new BufferAttribute(new Float32Array(n), 1));
    copperMesh.geometry = g;
    setRims(segmentsOf(copper.elements.flatMap((e) => e.outline)));
    setSegments(holes, segmentsOf(copper.drawings.flatMap((d) => d.rims)));
  }

  /** @param look  number of the look of a stretch, -1 for what no drawing has */
  function setStretch(copper: CopperPicture, look: (e: ElementPicture) => number): void {
    const a = copperMesh.geometry.getAttribute('aStretch') as BufferAttribute | undefined;
    if (!a) return;
    for (const e of copper.elements)
      for (let i = 3 * e.first; i < 3 * (e.first + e.count); i++)
        (a.array as Float32Array)[copper.corners[i]!] = look(e);
    a.needsUpdate = true;
  }

  function setReach(
    copper: CopperPicture,
    reach: ReachPicture | null,
    plan: PlanPicture | null,
    depth: number,
  ): void {
    const g = copperMesh.geometry;
    const spread = (name: string, value: (t: number) => number) => {
      const a = g.getAttribute(name) as BufferAttribute | undefined;
      if (!a) return;
      const flat = a.array as Float32Array;
      // A vertex shows what one of its triangles has: patterns are true to the width of one triangle.
      for (let t = 0; t < copper.area.length; t++) {
        const v = value(t);
        flat[copper.corners[3 * t]!] = v;
        flat[copper.corners[3 * t + 1]!] = v;
        flat[copper.corners[3 * t + 2]!] = v;
      }
      a.needsUpdate = true;
    };
    spread('aUsable', reach ? (t) => reach.usable[t]! : () => depth);
    spread('aFails', reach ? (t) => reach.fails[t]! : () => 0);
    spread('aLayer', plan ? (t) => plan.layerOf[t]! : () => 0);
    const doses = reach
      ? copper.elements.filter((e) =>
          reach.fails.subarray(e.first, e.first + e.count).some((f) => (f & 16) !== 0),
        )
      : [];
    setSegments(doseLines, segmentsOf(doses.flatMap((e) => e.outline)));
  }

  function setPose(setup: Setup): void {
    const [x, y, z, w] = setup.pose.rotate;
    part.matrix.compose(
      new Vector3(...setup.pose.move),
      new Quaternion(x, y, z, w).normalize(),
      new Vector3(1, 1, 1),
    );
    part.matrixWorldNeedsUpdate = true;
  }

  function setHead(head: Head): void {
    const [fx, fy] = [head.field[0] / 2, head.field[1] / 2];
    const t = Math.min(fx, fy) * 0.06;
    // The square, a cross on the axis, and an arrow along +X and +Y so that a mirrored field is seen at once.
    const lines = [
      [-fx, -fy, fx, -fy],
      [fx, -fy, fx, fy],
      [fx, fy, -fx, fy],
      [-fx, fy, -fx, -fy],
      [-t, 0, t, 0],
      [0, -t, 0, t],
      [fx, 0, fx + 2 * t, 0],
      [fx + 2 * t, 0, fx + t, t / 2],
      [fx + 2 * t, 0, fx + t, -t / 2],
      [0, fy, 0, fy + t],
      [0, fy + t, t / 2, fy + t / 2],
      [0, fy + t, -t / 2, fy + t / 2],
    ];
    square.geometry.dispose();
    square.geometry = geometryOf(
      Float32Array.from(lines.flatMap(([a, b, c, d]) => [a!, b!, 0, c!, d!, 0])),
      null,
    );
    plane.scale.set(head.field[0], head.field[1], 1);
    const body = new CylinderGeometry(head.bodyDiameter / 2, head.bodyDiameter / 2, 40, 48, 1, true);
    body.applyMatrix4(new Matrix4().makeRotationX(Math.PI / 2)).translate(0, 0, head.workingDistance + 20);
    lens.geometry.dispose();
    glass.geometry.dispose();
    lens.geometry = new EdgesGeometry(body, 20);
    glass.geometry = body;
  }

  /** @param look  what to show of the bench */
  function setView(look: {
    offset: number;
    atOffset: boolean;
    alone: number;
    stretch: boolean;
    plane: boolean;
    lens: boolean;
    cut: [number, number, number, number] | null;
  }): void {
    copperMat.uniforms['uOffset']!.value = look.offset;
    copperMat.uniforms['uAtOffset']!.value = look.atOffset ? 1 : 0;
    copperMat.uniforms['uAlone']!.value = look.alone;
    copperMat.uniforms['uStretch']!.value = look.stretch ? 1 : 0;
    for (const m of [copperMat, partMat, rimMat])
      m.uniforms['uCut']!.value.set(...(look.cut ?? [0, 0, 0, 1]));
    bench.position.z = -look.offset;
    square.visible = plane.visible = look.plane;
    lens.visible = glass.visible = look.lens;
  }

  function setScheme(s: Scheme): void {
    renderer.setClearColor(new Color(s.background));
    partMat.uniforms['uColor']!.value.set(s.part);
    copperMat.uniforms['uPart']!.value.set(s.part);
    edgeMat.color.set(s.edge);
    squareMat.color.set(s.plane);
    planeMat.color.set(s.plane);
    lensMat.color.set(s.lens);
    glassMat.color.set(s.lens);
    rimMat.uniforms['uColor']!.value.set(s.copperEdge);
    (chosen.material as LineMaterial).color.set(s.select);
    (live.material as LineMaterial).color.set(s.live);
    (holes.material as LineMaterial).color.set(s.hole);
    (pointed.material as LineMaterial).color.set(s.live);
    (beam.material as LineMaterial).color.set(s.live);
  }

  /** @param pixels  device pixels in a CSS pixel, lower while things move */
  function draw(eye: Eye, width: number, height: number, pixels: number): void {
    // Setting a size, even the same one, makes the browser allocate the picture anew.
    if (width !== size.width || height !== size.height || pixels !== size.pixels) {
      size = { width, height, pixels };
      renderer.setPixelRatio(pixels);
      renderer.setSize(width, height, false);
    }
    copperMat.uniforms['uGrain']!.value = pixels;
    const aspect = width / height;
    camera.left = -eye.half * aspect;
    camera.right = eye.half * aspect;
    camera.top = eye.half;
    camera.bottom = -eye.half;
    const { right, up, back } = axesOf(eye);
    const m = new Matrix4().makeBasis(new Vector3(...right), new Vector3(...up), new Vector3(...back));
    camera.quaternion.setFromRotationMatrix(m);
    camera.position.set(
      eye.target[0] + back[0] * FAR,
      eye.target[1] + back[1] * FAR,
      eye.target[2] + back[2] * FAR,
    );
    camera.updateProjectionMatrix();
    for (const l of [doseLines, holes, chosen, pointed, live, beam])
      (l.material as LineMaterial).resolution.set(width, height);
    renderer.render(scene, camera);
  }

  return {
    renderer,
    setPart,
    setCopper,
    setReach,
    setStretch,
    setPose,
    setHead,
    setView,
    setScheme,
    setChosen: (loops: readonly Float32Array[]) => setSegments(chosen, segmentsOf(loops)),
    /** What a panel points at. */
    setPointed: (loops: readonly Float32Array[]) => setSegments(pointed, segmentsOf(loops)),
    setLive: (runs: readonly Float32Array[]) => setSegments(live, segmentsOf(runs)),
    /** The beam to a place, bench frame, or nothing. */
    setBeam: (from: Vec3 | null, to: Vec3 | null) =>
      setSegments(beam, from && to ? Float32Array.of(...from, ...to) : new Float32Array(0)),
    draw,
    dispose: () => renderer.dispose(),
  };
}

/** Lines as segments, 6 numbers each. */
function segmentsOf(lines: readonly Float32Array[]): Float32Array {
  const total = lines.reduce((n, l) => n + Math.max(0, l.length / 3 - 1), 0);
  const out = new Float32Array(6 * total);
  let o = 0;
  for (const l of lines) for (let i = 0; i + 5 < l.length; i += 3, o += 6) out.set(l.subarray(i, i + 6), o);
  return out;
}
