import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { InputError } from '../../../src/core/base/news.ts';
import { quiet } from '../../../src/core/base/run-context.ts';
import { buildMesh } from '../../../src/core/mesh/build.ts';
import { checkMesh } from '../../../src/core/mesh/check-mesh.ts';
import { readStl } from '../../../src/core/mesh/stl.ts';
import { binaryStl, bytesOf, type Facet, lumpyRing, soupOf, textStl } from './parts.ts';

const SEED = 20;
const facetOf = (coordinate: fc.Arbitrary<number>): fc.Arbitrary<Facet> => {
  const corner = fc.tuple(coordinate, coordinate, coordinate);
  return fc.tuple(corner, corner, corner);
};
const facet = facetOf(fc.float({ min: -1000, max: 1000, noNaN: true }));
/** Corners from a small grid, so that facets share edges, repeat, fold and lie flat. */
const crowdedFacet = facetOf(fc.integer({ min: 0, max: 2 }));

function readOrProblem(bytes: Uint8Array): 'read' | string {
  try {
    const soup = readStl(bytes, 'part.stl', quiet);
    expect(soup.corners.every((v) => Number.isFinite(v))).toBe(true);
    expect(soup.corners.length % 9).toBe(0);
    return 'read';
  } catch (e) {
    if (e instanceof InputError) return e.code;
    throw e;
  }
}

describe(`any file is read or named as bad, and nothing else happens (seed ${SEED})`, () => {
  test('any bytes', () => {
    fc.assert(
      fc.property(fc.uint8Array({ maxLength: 400 }), (bytes) => void readOrProblem(bytes)),
      { seed: SEED, numRuns: 500 },
    );
  });
  test('a binary file cut anywhere is never read as another part', () => {
    const whole = binaryStl(lumpyRing(6, 4));
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: whole.length - 1 }),
        (n) => readOrProblem(whole.slice(0, n)) !== 'read',
      ),
      { seed: SEED, numRuns: 300 },
    );
  });
  test('a text file cut anywhere before its last word is never read as another part', () => {
    const whole = textStl(lumpyRing(4, 3));
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: whole.lastIndexOf('endsolid') }),
        (n) => readOrProblem(bytesOf(whole.slice(0, n))) !== 'read',
      ),
      { seed: SEED, numRuns: 300 },
    );
  });
  test('a text file with any one byte changed', () => {
    const whole = bytesOf(textStl(lumpyRing(3, 3)));
    fc.assert(
      fc.property(fc.integer({ min: 0, max: whole.length - 1 }), fc.integer({ min: 0, max: 255 }), (i, b) => {
        const bytes = whole.slice();
        bytes[i] = b;
        readOrProblem(bytes);
      }),
      { seed: SEED, numRuns: 500 },
    );
  });
});

test(`binary and text forms of the same facets give the same corners (seed ${SEED})`, () => {
  fc.assert(
    fc.property(fc.array(facet, { minLength: 1, maxLength: 20 }), (facets) => {
      const binary = readStl(binaryStl(facets), 'b', quiet).corners;
      const text = readStl(bytesOf(textStl(facets)), 't', quiet).corners;
      // Text keeps –0 apart from 0, as String(-0) is "0": compare as numbers.
      expect([...text].map((v) => v + 0)).toEqual([...binary].map((v) => v + 0));
    }),
    { seed: SEED, numRuns: 200 },
  );
});

test(`whatever the facets, the mesh keeps every rule, and each facet is a face or counted as left out (seed ${SEED})`, () => {
  fc.assert(
    fc.property(fc.array(crowdedFacet, { minLength: 1, maxLength: 40 }), (facets) => {
      const soup = soupOf(facets);
      try {
        const mesh = buildMesh(soup, 1, quiet);
        expect(checkMesh(mesh)).toEqual([]);
        const left = [...mesh.faceOfFacet].filter((f) => f < 0).length;
        expect(left).toBe(mesh.mended.degenerate + mesh.mended.duplicate);
      } catch (e) {
        expect((e as InputError).code).toBe('no-area');
      }
    }),
    { seed: SEED, numRuns: 1000 },
  );
});
