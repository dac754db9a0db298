/** Paths of a flat drawing in the page, with their colours and patterns. */
import type { FlatLook } from '../store/flat.ts';
import type { Figures } from '../store/flat-paths.ts';

const PLAIN: readonly FlatLook[] = ['copper', 'pending', 'left-out', 'little'];

/** What a look is painted with; patterns stand in `FlatPatterns`. */
const paintOf = (look: FlatLook): string =>
  PLAIN.includes(look) ? `var(--flat-${look})` : `url(#flat-${look})`;

/** @param grow  px that lines and areas are drawn wider, in one colour: a rim, or a halo */
export function FigureLayer({
  figures,
  scale,
  grow = 0,
  className = '',
}: {
  figures: readonly Figures[];
  scale: number;
  grow?: number;
  className?: string;
}) {
  return (
    <g className={className}>
      {figures.map(({ key, look, width, cap, join, d }) => {
        const paint = grow > 0 ? 'currentColor' : paintOf(look);
        if (width > 0)
          return (
            <path
              key={key}
              data-flat={look}
              d={d}
              fill="none"
              stroke={paint}
              strokeWidth={width + grow / scale}
              strokeLinecap={cap}
              strokeLinejoin={join}
            />
          );
        return (
          <path
            key={key}
            data-flat={look}
            d={d}
            fill={paint}
            stroke={grow > 0 ? paint : 'none'}
            strokeWidth={grow / scale}
            strokeLinejoin="round"
          />
        );
      })}
    </g>
  );
}

/** Patterns keep their size on the screen. */
export function FlatPatterns({ scale }: { scale: number }) {
  const tile = (look: FlatLook, marks: string, round = false) => (
    <pattern
      id={`flat-${look}`}
      width="8"
      height="8"
      patternUnits="userSpaceOnUse"
      patternTransform={`scale(${1 / scale} ${-1 / scale})`}
    >
      <g className={`weave stretch-${look}`}>
        <rect className="base" width="8" height="8" />
        <path className={round ? 'mark round' : 'mark'} d={marks} />
      </g>
    </pattern>
  );
  return (
    <defs>
      {tile('some', 'M4 4 h0', true)}
      {tile('much', 'M-2 2 L2 -2 M-1 9 L9 -1 M6 10 L10 6')}
      {tile('too-much', 'M-1 9 L9 -1 M-1 -1 L9 9')}
      {tile('not-laid', 'M4 1.5 V6.5 M1.5 4 H6.5')}
    </defs>
  );
}
