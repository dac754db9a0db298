/**
 * The project file (`*.drape.json`): its schema, defaults and reading. Lengths mm, angles degrees.
 * Fields that are not known are kept and reported, never dropped.
 */
import { z } from 'zod';

const num = z.number().finite();
const positive = num.positive();
const notNegative = num.nonnegative();
const vec2 = z.tuple([num, num]);
const vec3 = z.tuple([num, num, num]);

const head = z.looseObject({
  wavelength_nm: positive,
  beamQuality: num.min(1),
  beamDiameter: positive,
  aperture: positive,
  focalLength: positive,
  field: z.tuple([positive, positive]),
  workingDistance: positive,
  bodyDiameter: positive,
  pivot: z
    .union([z.null(), z.tuple([positive.nullable(), positive.nullable()])])
    .transform((p) => p ?? ([null, null] as [null, null])),
  averagePower_W: positive,
  repetitionRate_kHz: positive,
  pulseWidth_ns: positive,
  axes: z
    .looseObject({
      swap: z.boolean().optional(),
      flipX: z.boolean().optional(),
      flipY: z.boolean().optional(),
      turn: num.optional(),
      scale: z.union([positive, z.tuple([positive, positive])]).optional(),
    })
    .optional(),
});

const material = z.looseObject({
  activationFluence: positive,
  damageFluence: positive,
  doseMargin: num.min(1).default(1.3),
});

const depth = z.union([
  z.looseObject({ mode: z.literal('distance'), halfDepth: positive }),
  z.looseObject({ mode: z.literal('spot'), growth: num.gt(1) }),
  z.looseObject({ mode: z.literal('dose') }),
]);

const limits = z.looseObject({
  depth: depth.default({ mode: 'distance', halfDepth: 2 }),
  maxIncidence: num.gt(0).lt(90).default(60),
  cone: z.boolean().default(false),
  maxBlocked: num.min(0).max(1).default(0.1),
  clearance: notNegative.default(10),
  minWidth: notNegative.default(0.25),
  safeWidth: notNegative.default(0.5),
  minGap: notNegative.default(0.25),
  safeGap: notNegative.default(0.5),
  safeStretch: notNegative.default(0.05),
  maxStretch: notNegative.default(0.15),
  /**
   * Degrees between faces that count as a sharp edge, degrees below which an inner corner of copper is acute, and least
   * distance of copper from the end of the surface, mm.
   */
  sharpEdge: num.min(0).max(180).optional(),
  acuteCorner: num.min(0).max(180).optional(),
  borderGap: notNegative.optional(),
  heightUncertainty: notNegative.default(0.3),
  maxResidual: positive.default(0.15),
  proof: z
    .looseObject({
      covered: num.min(0).max(1).default(0.995),
      strayTolerance: notNegative.default(0.05),
      stray: notNegative.default(0.001),
    })
    .prefault({}),
});

const stage = z.looseObject({
  step: notNegative.default(0.01),
  range: z.tuple([num, num]).default([-30, 30]),
  zMoves: z.enum(['stage', 'head']).default('stage'),
});

const scan = z.looseObject({
  linePitch: positive.default(0.03),
  markSpeed: positive.default(800),
  jumpSpeed: positive.default(3000),
  jumpDelay_us: notNegative.default(300),
  markDelay_us: notNegative.default(150),
  stitch: notNegative.default(0.2),
  passes: num.int().min(1).max(100).default(1),
});

const copper = z.looseObject({
  thickness_um: positive.default(3),
  depositFactor: num.min(1).default(1.2),
  rate_um_per_h: positive.default(6),
  bathVolume_L: positive.default(1),
  bathLoad: z.tuple([notNegative, positive]).default([0.5, 2.5]),
  temperature_C: num.default(20),
  temperatureRise: positive.default(10),
  density: positive.default(8.89),
});

const pose = z.looseObject({
  rotate: z
    .tuple([num, num, num, num])
    .refine(
      (q) => Math.abs(Math.hypot(...q) - 1) < 1e-3,
      'a quaternion of unit length [x, y, z, w] is needed',
    ),
  move: vec3,
});

const measuredPoint = z.union([vec3, z.looseObject({ command: vec2, offset: num })]);
const setup = z.looseObject({
  name: z.string().min(1),
  pose,
  measured: z.record(z.string(), measuredPoint).optional(),
  /** Layers at heights chosen by hand, mm in the bench at stage offset 0; left out, the planner finds the fewest. */
  focusHeights: z.array(num).min(1).max(200).optional(),
});

const place = z.looseObject({ at: vec3 });
const id = z.string().min(1);
const net = z.string().default('');
const padShape = z.union([
  z.strictObject({ circle: positive }),
  z.strictObject({ rect: z.tuple([positive, positive]) }),
  z.strictObject({ slot: z.tuple([positive, positive]) }),
  z.strictObject({ outline: z.array(vec2).min(3) }),
]);
const trace = z.looseObject({
  id,
  kind: z.literal('trace'),
  net,
  width: positive,
  route: z.array(place).min(2),
  /** How it is finished, in the words of SVG 2; left out, round. A mitre past four times the width is bevelled. */
  ends: z.enum(['round', 'square', 'butt']).optional(),
  bends: z.enum(['round', 'miter']).optional(),
});
const pad = z.looseObject({
  id,
  kind: z.literal('pad'),
  net,
  at: vec3,
  shape: padShape,
  turn: num.default(0),
});
const region = z.looseObject({ id, kind: z.literal('region'), net, outline: z.array(place).min(3) });
const element = z.discriminatedUnion('kind', [trace, pad, region]);

const units = z.enum(['mm', 'cm', 'm', 'um', 'inch']);

const drape = z.looseObject({
  id,
  drawing: z.string().min(1),
  anchor: vec3,
  origin: vec2.default([0, 0]),
  turn: num.default(0),
  mirror: z.boolean().default(false),
  evenLengths: z.boolean().default(true),
  drawingLayers: z.record(z.string(), z.string()).default({}),
  nets: z.record(z.string(), z.string()).default({}),
  /** As drawn, or its lines pulled straight from corner to corner. */
  lay: z.enum(['as drawn', 'pulled straight']).optional(),
  /** Unit of a drawing that names none. */
  units: units.optional(),
  /** Width of lines that have none, mm. */
  lineWidth: positive.optional(),
});

const circuit = z.looseObject({
  elements: z.array(element).default([]),
  drapes: z.array(drape).default([]),
});

export const projectSchema = z.looseObject({
  format: z.literal('beamdrape'),
  version: z.literal(1),
  name: z.string().min(1),
  part: z.looseObject({
    file: z.string().min(1),
    units: units.default('mm'),
    sha256: z.string().optional(),
  }),
  head,
  material,
  limits: limits.prefault({}),
  stage: stage.prefault({}),
  scan: scan.prefault({}),
  copper: copper.prefault({}),
  setups: z.union([z.array(setup).min(1), z.literal('auto')]),
  circuit: circuit.prefault({}),
  fiducials: z.array(z.looseObject({ name: z.string().min(1), at: vec3 })).optional(),
  netlist: z.string().optional(),
  cradle: z.looseObject({}).optional(),
});

export type Project = z.infer<typeof projectSchema>;
export type Drape = Project['circuit']['drapes'][number];
export type Head = Project['head'];
export type Material = Project['material'];
export type Limits = Project['limits'];
export type Stage = Project['stage'];
export type ScanSettings = Project['scan'];
export type Setup = Exclude<Project['setups'], 'auto'>[number];
export type Element = Project['circuit']['elements'][number];
export type Trace = Extract<Element, { kind: 'trace' }>;
export type Pad = Extract<Element, { kind: 'pad' }>;
export type Region = Extract<Element, { kind: 'region' }>;
export type PadShape = Pad['shape'];
