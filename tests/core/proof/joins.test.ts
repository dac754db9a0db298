import { describe, expect, it } from 'vitest';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { buildNormals } from '../../../src/core/part/normals.ts';
import type { BurntPulses } from '../../../src/core/proof/burnt-pulses.ts';
import { copperGrid } from '../../../src/core/proof/copper-grid.ts';
import { findJoins } from '../../../src/core/proof/joins.ts';
import { sampleCopper } from '../../../src/core/proof/samples.ts';
import { touchingPairs } from '../../../src/core/proof/touching.ts';
import { box, copperOf, meshOf, type Rect } from '../helpers/proof-scene.ts';

const A = 0.025;
/** Pulses by hand: all of one size, toward the head along `u`, `cos` as on the plate z = 0 unless given. */
function pulsesAt(
  u: Vec3,
  list: { at: Vec3; elements: number[]; face?: number; cos?: number }[],
): BurntPulses {
  const n = list.length;
  const start = [0];
  for (const p of list) start.push(start[start.length - 1] + p.elements.length);
  return {
    count: n,
    hit: Float64Array.from(list.flatMap((p) => [...p.at])),
    toward: Float32Array.from(list.flatMap(() => [...u])),
    face: Int32Array.from(list, (p) => p.face ?? 0),
    halfWidth: new Float32Array(n).fill(A),
    cos: Float32Array.from(list, (p) => p.cos ?? u[2]),
    nearest: new Float32Array(n),
    radius: new Float32Array(n).fill(0.023),
    start: Uint32Array.from(start),
    element: Int32Array.from(list.flatMap((p) => p.elements)),
  };
}

const plate = box(-5, -4, 6, 5, 2);
const rects: Rect[] = [
  { id: 'a', net: 'A', from: [-3, -1], to: [0, 0] },
  { id: 'b', net: 'B', from: [0.1, -1], to: [3, 0.5] },
];
const grid = copperGrid(copperOf(rects));
const join = (p: BurntPulses, mesh = plate) => findJoins(p, mesh, grid, 2, Int32Array.of(0, 1), 2);
const two = (u: Vec3, step: Vec3) =>
  pulsesAt(u, [
    { at: [-2, -0.5, 0], elements: [0] },
    { at: [-2 + step[0], -0.5 + step[1], step[2]], elements: [0] },
  ]);

describe('pulses that hang together', () => {
  const lean = (degrees: number): Vec3 => [
    Math.sin((degrees * Math.PI) / 180),
    0,
    Math.cos((degrees * Math.PI) / 180),
  ];

  it.each([
    ['upright, either way', 0, [1, 0, 0], 2 * A],
    ['leaning 60°, across the tilt: the half-width', 60, [0, 1, 0], 2 * A],
    ['leaning 60°, along the tilt: twice that', 60, [1, 0, 0], 4 * A],
  ] as [string, number, Vec3, number][])(
    'touch at the sum of their ellipses and not beyond: %s',
    (_, degrees, [x, y], reach) => {
      const at = (k: number) => join(two(lean(degrees), [x * reach * k, y * reach * k, 0])).pieces[0];
      expect([at(0.98), at(1.02)]).toEqual([1, 2]);
    },
  );

  it('a chain of pulses is one piece whatever their order', () => {
    const list = [5, 2, 0, 7, 1, 4, 3, 6].map((k) => ({
      at: [-2 + 0.04 * k, -0.5, 0] as Vec3,
      elements: [0],
    }));
    expect(join(pulsesAt([0, 0, 1], list)).pieces[0]).toBe(1);
    expect(
      join(
        pulsesAt(
          [0, 0, 1],
          list.filter((_, i) => i !== 5),
        ),
      ).pieces[0],
    ).toBe(2);
  });

  it('a bridge of pulses on no copper joins two nets and touches none of the elements together', () => {
    const list = Array.from({ length: 7 }, (_, k) => {
      const x = -0.07 + 0.04 * k;
      return { at: [x, -0.5, 0] as Vec3, elements: x < 0 ? [0] : x > 0.1 ? [1] : [] };
    });
    const { joined, touching, pieces } = join(pulsesAt([0, 0, 1], list));
    expect([[...joined], [...touching], [...pieces]]).toEqual([[1], [], [1, 1]]);
    expect([
      ...join(
        pulsesAt(
          [0, 0, 1],
          list.filter((_, i) => i !== 3),
        ),
      ).joined,
    ]).toEqual([]);
  });

  it('the two sides of a thin wall do not join', () => {
    const wall = meshOf(
      [-5, -5, 0, 5, -5, 0, 0, 5, 0, -5, -5, -0.01, 5, -5, -0.01, 0, 5, -0.01],
      [0, 1, 2, 3, 5, 4],
    );
    const sides = (face: number) =>
      pulsesAt(
        [0, 0, 1],
        [
          { at: [-2, -0.5, 0], elements: [0] },
          { at: [-2, -0.5, -0.01], elements: [1], face },
        ],
      );
    expect([...join(sides(0), wall).joined]).toEqual([1]);
    expect([...join(sides(1), wall).joined]).toEqual([]);
  });

  it("a neighbour's rim on an element is no piece of it, and makes no touch", () => {
    const list = [
      { at: [0.09, -0.5, 0] as Vec3, elements: [0, 1] }, // lands beside both, touches both
      { at: [-2, -0.5, 0] as Vec3, elements: [0] },
      { at: [2, -0.5, 0] as Vec3, elements: [1] },
    ];
    const { pieces, touching } = join(pulsesAt([0, 0, 1], list));
    expect([[...pieces], [...touching]]).toEqual([[1, 1], []]);
  });
});

describe('elements that touch in the drawing', () => {
  const pairs = (list: Rect[]) => {
    const copper = copperOf(list);
    return touchingPairs(copper, plate, sampleCopper(copper, plate, buildNormals(plate)), copperGrid(copper));
  };
  const one: Rect = { id: 'a', net: 'A', from: [-3, -0.3], to: [3, 0.3] };

  it.each([
    ['cross without a corner in each other', [-0.4, -2], [0.5, 2], true],
    ['lie one in the other', [-0.4, -0.1], [0.5, 0.2], true],
    ['share an edge', [3, -0.1], [4, 0.2], true],
    ['share a corner', [3, 0.3], [4, 2], true],
    ['stand 5 µm apart', [3.005, -0.1], [4, 0.2], false],
    ['have boxes apart', [3, 1], [4, 2], false],
  ] as [string, [number, number], [number, number], boolean][])(
    'are found: they %s',
    (_, from, to, touch) => {
      expect(pairs([one, { id: 'b', net: 'A', from, to }])).toEqual(touch ? [[0, 1]] : []);
    },
  );

  it('are only those of one net, and a net without a name is none', () => {
    const over: Rect = { ...one, id: 'b', net: 'B' };
    expect(pairs([one, over])).toEqual([]);
    expect(
      pairs([
        { ...one, net: '' },
        { ...over, net: '' },
      ]),
    ).toEqual([]);
  });
});
