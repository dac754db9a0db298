/**
 * Where the numbers of the reference tests come from. A reference test names its source by a key of this table; another test
 * sees to that. `seen` says how the value was taken: from the source's own text, from its formula, or from memory.
 */
export const sources = {
  'exact-geodesics': {
    title:
      'Exact distances on six meshes, CGAL 5.5.1 Surface_mesh_shortest_path; see tests/reference/geodesic/README.md',
    seen: 'computed',
  },
  'do-carmo': {
    title:
      'M. do Carmo, Differential Geometry of Curves and Surfaces, 1976: great circles, helices, cones, Gauss–Bonnet, geodesic discs',
    seen: 'formula',
  },
  'milnor-1969': {
    title:
      'J. Milnor, A problem in cartography, Amer. Math. Monthly 76 (1969) 1101: least distortion of a spherical cap',
    seen: 'theorem from memory, values by formula',
  },
  'karney-2013': {
    title:
      'C. F. F. Karney, Algorithms for geodesics, J. Geodesy 87 (2013) 43: lengths on spheroids, by quadrature of his integrals; geographiclib-geodesic 2.2.0 where the body is nearly round',
    seen: 'computed',
  },
  'svg-2': {
    title: 'W3C SVG 2, ch. 13: line caps, line joins, miter limit',
    seen: 'words from memory, areas by formula',
  },
  'svg-2-drawings': {
    title:
      'W3C SVG 2, ch. 8 (coordinates, viewBox), 9 (path data), 10 (shapes), 13 (fill rules), app. B (arcs by their ends); CSS Values: units',
    seen: 'units and rules of arcs as quoted in check-values.md §8, the rest from memory; numbers by formula',
  },
  'dxf-reference': {
    title: 'DXF reference: group codes, units of $INSUNITS, bulges, extrusion',
    seen: 'LWPOLYLINE quoted in check-values.md §8, the rest from memory; arcs by formula',
  },
  'gray-tubes': { title: 'A. Gray, Tubes, 1990 (Weyl’s formula): areas of bands', seen: 'formula' },
  'iso-11146': { title: 'ISO 11146-1: beam parameter product, M²', seen: 'formula, from memory' },
  siegman: { title: 'A. E. Siegman, Lasers, 1986: w(z), peak fluence', seen: 'formula' },
  'urey-2004': {
    title: 'H. Urey, Appl. Opt. 43 (2004) 620: truncated Gaussian beams',
    seen: 'coefficients from memory, checked against the integral',
  },
  'liu-1982': {
    title: 'J. M. Liu, Opt. Lett. 7 (1982) 196: activated width of a pulse',
    seen: 'formula, from memory',
  },
  'similar-triangles': { title: 'Elementary geometry of a ray through a pivot', seen: 'formula' },
  'kleinberg-tardos': {
    title: 'J. Kleinberg, É. Tardos, Algorithm Design, 2006, ch. 4: stabbing intervals',
    seen: 'by hand and by exhaustive search',
  },
  'johnson-mcgeoch': {
    title:
      'D. Johnson, L. McGeoch, The traveling salesman problem: a case study, 1997: nearest neighbour 25 % above Held–Karp',
    seen: 'from memory',
  },
  'iec-60028': { title: 'IEC 60028: resistivity of annealed copper', seen: 'quoted' },
  'thin-films': {
    title: 'P. M. Hall, Resistance calculations for thin film patterns, Thin Solid Films 1 (1968) 277',
    seen: 'corner and step from memory, the rest by formula (conformal maps)',
  },
  'ipc-2221': { title: 'IPC-2221: I = k ΔT^0.44 A^0.725', seen: 'from memory' },
  'mallory-hajdu': {
    title: 'G. Mallory, J. Hajdu, Electroless Plating, 1990: reaction',
    seen: 'from memory; balanced by molar masses (IUPAC)',
  },
  'xml-1': { title: 'W3C XML 1.0: names and ids', seen: 'from memory' },
  'rfc-4180': { title: 'RFC 4180: comma-separated values', seen: 'from memory' },
  'gerber-2022': {
    title: 'Gerber Layer Format Specification, 2022.02: commands, apertures, macros, polarity',
    seen: 'words from memory, areas by formula',
  },
  'circular-segments': {
    title: 'Elementary geometry of a circle’s segments: bulge = tan(angle / 4)',
    seen: 'formula',
  },
  'nc-drill': { title: 'IPC-NC-349: zeros, formats, slots of drill files', seen: 'from memory' },
  'ipc-d-356a': { title: 'IPC-D-356A: columns of the netlist’s records', seen: 'from memory' },
  rotation: { title: 'Closed forms of rotations by quaternions', seen: 'formula' },
} as const;

/** Names the source of a check; a key that is not in the table does not compile. */
export const source = (key: keyof typeof sources): string => sources[key].title;
