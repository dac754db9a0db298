/**
 * Colours of the copper and what is told about it: one list for the shader, the legend and the strip.
 * The part is pale and the copper light, so that the dark reasons stand off both: relative luminance
 * (WCAG 2.2) of reached copper is 0.395, of out-of-focus red at most 0.084, which is 3:1 or more in any light
 * that the shader makes. src/app/style.css repeats the values for the legend.
 */
import type { Reason } from '../core/reach/result.ts';

export interface Look {
  /** Fill. */
  base: string;
  /** The pattern's marks. */
  mark: string;
  pattern: 'plain' | 'slashes' | 'stripes' | 'dots' | 'dashes' | 'outline';
  words: string;
}

export const LOOKS: Record<Reason | 'reached', Look> = {
  reached: { base: '#de9a5f', mark: '#de9a5f', pattern: 'plain', words: 'Reached' },
  focus: { base: '#a80018', mark: '#5e000c', pattern: 'slashes', words: 'Out of focus' },
  incidence: { base: '#54389b', mark: '#c8bbf2', pattern: 'stripes', words: 'Too oblique' },
  shade: { base: '#22385c', mark: '#9fb6dc', pattern: 'dots', words: 'Shaded' },
  field: { base: '#0b5a48', mark: '#a9dfce', pattern: 'dashes', words: 'Off the field' },
  dose: { base: '#f0dcc4', mark: '#5e3d00', pattern: 'outline', words: 'Wrong dose' },
};

/** Copper by its stretch: darker and busier the more; src/app/style.css repeats the values for the legend. */
export const STRETCH_COLOURS = {
  little: { base: '#f3e2c9', mark: '#f3e2c9' },
  some: { base: '#e3ab3e', mark: '#7a4c00' },
  much: { base: '#b4481a', mark: '#f6cdb4' },
  'too-much': { base: '#5a1030', mark: '#f2b9cf' },
  'drawn-here': { base: '#a9a69f', mark: '#a9a69f' },
} as const;

export interface Scheme {
  background: string;
  part: string;
  edge: string;
  copperEdge: string;
  select: string;
  plane: string;
  lens: string;
  live: string;
  hole: string;
}

export const SCHEMES: Record<'light' | 'dark', Scheme> = {
  light: {
    background: '#eae7e1',
    part: '#f4f2ec',
    edge: '#8d8a83',
    copperEdge: '#6b3513',
    select: '#005f8f',
    plane: '#1d7f8a',
    lens: '#6d7378',
    live: '#00486d',
    hole: '#23282b',
  },
  dark: {
    background: '#15191c',
    part: '#cfcdc6',
    edge: '#6d6b66',
    copperEdge: '#4e260d',
    select: '#00a2ff',
    plane: '#5cc9d3',
    lens: '#9aa4aa',
    live: '#0070c0',
    hole: '#23282b',
  },
};
