/** A small sample of a look, with the same pattern as the copper in the viewport. */
import type { Reason } from '../core/reach/result.ts';
import type { StretchRow } from '../store/drapes.ts';

export function Swatch({ look }: { look: Reason | 'reached' }) {
  return (
    <svg
      className={`swatch look-${look}`}
      width="22"
      height="16"
      viewBox="0 0 22 16"
      aria-hidden="true"
      focusable="false"
    >
      <rect className="base" x="0.5" y="0.5" width="21" height="15" rx="2" />
      {look === 'focus' && (
        <path className="mark" d="M-2 17 L8 -1 M4 17 L14 -1 M10 17 L20 -1 M16 17 L26 -1" />
      )}
      {look === 'incidence' && <path className="mark" d="M1 4 H21 M1 8.5 H21 M1 13 H21" />}
      {look === 'shade' && (
        <path
          className="mark round"
          d="M4 5 h0 M9 5 h0 M14 5 h0 M19 5 h0 M6.5 11 h0 M11.5 11 h0 M16.5 11 h0"
        />
      )}
      {look === 'field' && <path className="mark" d="M2 4.5 h6 M12 4.5 h6 M6 11 h6 M16 11 h5" />}
      {look === 'dose' && <rect className="rim" x="2" y="2" width="18" height="12" rx="1" />}
    </svg>
  );
}

export function StretchSwatch({ look }: { look: StretchRow['look'] | 'not-laid' | 'left-out' }) {
  return (
    <svg
      className={`swatch stretch-${look}`}
      width="22"
      height="16"
      viewBox="0 0 22 16"
      aria-hidden="true"
      focusable="false"
    >
      <rect className="base" x="0.5" y="0.5" width="21" height="15" rx="2" />
      {look === 'some' && (
        <path className="mark round" d="M4 4.5 h0 M10 4.5 h0 M16 4.5 h0 M4 11 h0 M10 11 h0 M16 11 h0" />
      )}
      {(look === 'much' || look === 'too-much') && (
        <path className="mark" d="M-2 17 L8 -1 M4 17 L14 -1 M10 17 L20 -1 M16 17 L26 -1" />
      )}
      {look === 'not-laid' && (
        <path
          className="mark"
          d="M5 2 V7 M2.5 4.5 H7.5 M13 2 V7 M10.5 4.5 H15.5 M9 9 V14 M6.5 11.5 H11.5 M17 9 V14 M14.5 11.5 H19.5"
        />
      )}
      {look === 'too-much' && (
        <path className="mark" d="M-2 -1 L8 17 M4 -1 L14 17 M10 -1 L20 17 M16 -1 L26 17" />
      )}
    </svg>
  );
}
