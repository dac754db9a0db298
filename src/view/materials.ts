/** Shaders of the part and of the copper. The copper's rule is the one of src/store/looks.ts. */
import { Color, DoubleSide, ShaderMaterial, Vector4 } from 'three';
import { LOOKS, STRETCH_COLOURS } from './palette.ts';

/** A light that travels with the eye, and a weaker one from above: shape is seen from every side. */
const LIGHT = /* glsl */ `
  float lightOn(vec3 n, vec3 up) {
    float head = abs(n.z);
    float sky = 0.5 + 0.5 * dot(n, up);
    return 0.30 + 0.45 * head + 0.25 * sky;
  }
`;

const CUT = /* glsl */ `
  uniform vec4 uCut;
  void cut(vec3 bench) {
    if (dot(uCut.xyz, bench) > uCut.w) discard;
  }
`;

export function partMaterial(): ShaderMaterial {
  return new ShaderMaterial({
    side: DoubleSide,
    polygonOffset: true,
    polygonOffsetFactor: 1,
    polygonOffsetUnits: 2,
    uniforms: {
      uColor: { value: new Color() },
      uCut: { value: new Vector4(0, 0, 0, 1) },
      uInside: { value: new Color('#8a8378') },
    },
    vertexShader: /* glsl */ `
      varying vec3 vNormal;
      varying vec3 vUp;
      varying vec3 vBench;
      void main() {
        vNormal = normalMatrix * normal;
        vUp = (viewMatrix * vec4(0.0, 0.0, 1.0, 0.0)).xyz;
        vec4 bench = modelMatrix * vec4(position, 1.0);
        vBench = bench.xyz;
        gl_Position = projectionMatrix * viewMatrix * bench;
      }`,
    fragmentShader: /* glsl */ `
      uniform vec3 uColor;
      uniform vec3 uInside;
      varying vec3 vNormal;
      varying vec3 vUp;
      varying vec3 vBench;
      ${LIGHT}
      ${CUT}
      void main() {
        cut(vBench);
        float l = lightOn(normalize(vNormal), vUp);
        gl_FragColor = vec4(gl_FrontFacing ? uColor * l * l : uInside * l, 1.0);
        #include <colorspace_fragment>
      }`,
  });
}

/** Thin lines that lie on the surface: drawn a little nearer than they are, so that the surface does not swallow them. */
export function surfaceLineMaterial(): ShaderMaterial {
  return new ShaderMaterial({
    uniforms: { uColor: { value: new Color() }, uCut: { value: new Vector4(0, 0, 0, 1) } },
    vertexShader: /* glsl */ `
      varying vec3 vBench;
      void main() {
        vec4 bench = modelMatrix * vec4(position, 1.0);
        vBench = bench.xyz;
        gl_Position = projectionMatrix * viewMatrix * bench;
        gl_Position.z -= 1.2e-4 * gl_Position.w;
      }`,
    fragmentShader: /* glsl */ `
      uniform vec3 uColor;
      varying vec3 vBench;
      ${CUT}
      void main() {
        cut(vBench);
        gl_FragColor = vec4(uColor, 1.0);
        #include <colorspace_fragment>
      }`,
  });
}

export type CopperMaterial = ReturnType<typeof copperMaterial>;

export function copperMaterial() {
  const color = (c: string) => ({ value: new Color(c) });
  return new ShaderMaterial({
    side: DoubleSide,
    polygonOffset: true,
    polygonOffsetFactor: -1,
    polygonOffsetUnits: -8,
    uniforms: {
      uCopper: color(LOOKS.reached.base),
      uFocus: color(LOOKS.focus.base),
      uFocusMark: color(LOOKS.focus.mark),
      uIncidence: color(LOOKS.incidence.base),
      uIncidenceMark: color(LOOKS.incidence.mark),
      uShade: color(LOOKS.shade.base),
      uShadeMark: color(LOOKS.shade.mark),
      uField: color(LOOKS.field.base),
      uFieldMark: color(LOOKS.field.mark),
      uDose: color(LOOKS.dose.base),
      uPart: { value: new Color() },
      /** 1: coloured by stretch. */
      uStretch: { value: 0 },
      uLittle: color(STRETCH_COLOURS.little.base),
      uSome: color(STRETCH_COLOURS.some.base),
      uSomeMark: color(STRETCH_COLOURS.some.mark),
      uMuch: color(STRETCH_COLOURS.much.base),
      uMuchMark: color(STRETCH_COLOURS.much.mark),
      uTooMuch: color(STRETCH_COLOURS['too-much'].base),
      uTooMuchMark: color(STRETCH_COLOURS['too-much'].mark),
      uDrawnHere: color(STRETCH_COLOURS['drawn-here'].base),
      /** Stage offset, mm. */
      uOffset: { value: 0 },
      /** 1: as it stands at this offset; 0: as the layers write it. */
      uAtOffset: { value: 0 },
      /** Layer shown alone, -1 for all. */
      uAlone: { value: -1 },
      /** Device pixels in one pattern unit. */
      uGrain: { value: 1 },
      uCut: { value: new Vector4(0, 0, 0, 1) },
    },
    vertexShader: /* glsl */ `
      attribute float aHeight;
      attribute float aUsable;
      attribute float aFails;
      attribute float aLayer;
      attribute float aStretch;
      varying vec3 vNormal;
      varying vec3 vBench;
      varying float vHeight;
      flat varying float vUsable;
      flat varying float vFails;
      flat varying float vLayer;
      flat varying float vStretch;
      void main() {
        vStretch = aStretch;
        vNormal = normalMatrix * normal;
        vHeight = aHeight;
        vUsable = aUsable;
        vFails = aFails;
        vLayer = aLayer;
        vec4 bench = modelMatrix * vec4(position, 1.0);
        vBench = bench.xyz;
        gl_Position = projectionMatrix * viewMatrix * bench;
      }`,
    fragmentShader: /* glsl */ `
      uniform vec3 uCopper, uFocus, uFocusMark, uIncidence, uIncidenceMark, uShade, uShadeMark, uField, uFieldMark, uDose, uPart;
      uniform vec3 uLittle, uSome, uSomeMark, uMuch, uMuchMark, uTooMuch, uTooMuchMark, uDrawnHere;
      uniform float uStretch, uOffset, uAtOffset, uAlone, uGrain;
      varying vec3 vNormal;
      varying vec3 vBench;
      varying float vHeight;
      flat varying float vUsable;
      flat varying float vFails;
      flat varying float vLayer;
      flat varying float vStretch;
      ${CUT}
      vec3 stretched(vec2 p) {
        if (vStretch < -0.5) return uDrawnHere;
        if (vStretch < 0.5) return uLittle;
        if (vStretch < 1.5) {
          vec2 q = fract(p / 6.0) * 6.0 - 3.0;
          return dot(q, q) < 1.6 ? uSomeMark : uSome;
        }
        bool slash = fract((p.x + p.y) / 8.0) < 0.28;
        if (vStretch < 2.5) return slash ? uMuchMark : uMuch;
        return slash || fract((p.x - p.y) / 8.0) < 0.28 ? uTooMuchMark : uTooMuch;
      }
      void main() {
        cut(vBench);
        vec2 p = gl_FragCoord.xy / uGrain;
        int fails = int(vFails + 0.5);
        vec3 c = uCopper;
        if (uStretch > 0.5) c = stretched(p);
        else if ((fails & 8) != 0) {
          float row = floor(p.y / 6.0);
          bool on = fract(p.y / 6.0) < 0.42 && fract(p.x / 12.0 + 0.5 * mod(row, 2.0)) < 0.6;
          c = on ? uFieldMark : uField;
        } else if ((fails & 4) != 0) {
          float row = floor(p.y / 5.0);
          vec2 q = vec2(fract(p.x / 6.0 + 0.5 * mod(row, 2.0)) * 6.0 - 3.0, fract(p.y / 5.0) * 5.0 - 2.5);
          c = dot(q, q) < 1.9 ? uShadeMark : uShade;
        } else if ((fails & 2) != 0) c = fract(p.y / 6.0) < 0.4 ? uIncidenceMark : uIncidence;
        else if ((fails & 16) != 0) c = uDose;
        else if (uAtOffset > 0.5 ? abs(vHeight + uOffset) > vUsable : vLayer < -0.5 && vLayer > -1.5) {
          c = fract((p.x + p.y) / 8.0) < 0.4 ? uFocusMark : uFocus;
        }
        float l = 0.72 + 0.28 * abs(normalize(vNormal).z);
        c *= l;
        if (uAlone > -0.5 && abs(vLayer - uAlone) > 0.25 && abs(vLayer + 1.0) > 0.25) c = mix(uPart * 0.8, c, 0.18);
        gl_FragColor = vec4(c, 1.0);
        #include <colorspace_fragment>
      }`,
  });
}
