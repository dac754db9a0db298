/** Drawings for window and store tests: nothing about them looks the same mirrored or turned. */

/** 8 mm long, its middle off the middle of the page: a trace with a name, one without, a filled square, and text to leave out. */
export const comb = `<svg xmlns="http://www.w3.org/2000/svg" width="10mm" height="6mm" viewBox="0 0 10 6">
  <path id="spine" d="M1 4 H9" fill="none" stroke="black" stroke-width="0.6"/>
  <path d="M3 4 V1.5" fill="none" stroke="black" stroke-width="0.5"/>
  <rect id="pad" x="7" y="0.5" width="2" height="1.2"/>
  <text x="1" y="1">TOP</text>
</svg>
`;

/** 30 by 18 mm: lines in two nets, a ring, pads, one shape in a group of its own. */
export const board = `<svg xmlns="http://www.w3.org/2000/svg" width="30mm" height="18mm" viewBox="0 0 30 18">
  <g fill="none" stroke="black" stroke-linecap="round">
    <path id="spine" stroke-width="0.6" d="M2 14 H26 C28 14 28 10 26 10"/>
    <path id="meander" stroke-width="0.5" d="M3 4 h8 v2 h-8 v2 h8 v2 h-8"/>
    <path id="slant" stroke-width="0.8" d="M14 3 L20 9 L26 4"/>
  </g>
  <rect id="pad1" x="1" y="13" width="2" height="2"/>
  <path id="ring" fill-rule="evenodd" d="M13 8 h4 v4 h-4 z M14 9 h2 v2 h-2 z"/>
  <circle id="far" cx="29" cy="2" r="0.9"/>
  <g id="notes"><circle id="dot" cx="9" cy="16.5" r="0.8"/></g>
</svg>
`;
