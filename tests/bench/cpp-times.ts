/**
 * Medians of processor time in milliseconds of two widely used C++ libraries, one thread, g++ 12 -O3, on a machine with two
 * cores of a recent server processor: edge flips and windows by geometry-central. Lumpy icospheres, ends at 5 % and 50 % of
 * the surface's diameter. On another machine a ratio is rough.
 */
export const COLUMNS = [20480, 81920, 327680, 1310720];

export const cppTimes: Record<string, { what: string; ms: (number | undefined)[] }> = {
  'surface from facets': { what: 'set-up for flips', ms: [5.3, 27, 150, 723] },
  'start path, 5 %': { what: 'Dijkstra', ms: [0.02, 0.08, 0.41, 2.2] },
  'start path, 50 %': { what: 'Dijkstra', ms: [1.4, 6.5, 37, 299] },
  'flips, 5 %': { what: 'flips', ms: [0.002, 0.008, 0.04, 0.18] },
  'flips, 50 %': { what: 'flips', ms: [0.13, 0.79, 3.6, 16.7] },
  'certified exact, 5 %': { what: 'windows, stop at target', ms: [0.12, 1.3, 9.3, 76] },
  'certified exact, 50 %': { what: 'windows, stop at target', ms: [101, 1060, 15300, undefined] },
  whole: { what: 'windows', ms: [294, 3200, undefined, undefined] },
};
