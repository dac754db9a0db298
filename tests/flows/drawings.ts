/** Drawings for window and store tests: nothing about them looks the same mirrored or turned. */

/** 8 mm long, its middle off the middle of the page: a trace with a name, one without, a filled square, and text to leave out. */
export const comb = `<svg xmlns="http://www.w3.org/2000/svg" width="10mm" height="6mm" viewBox="0 0 10 6">
  <path id="spine" d="M1 4 H9" fill="none" stroke="black" stroke-width="0.6"/>
  <path d="M3 4 V1.5" fill="none" stroke="black" stroke-width="0.5"/>
  <rect id="pad" x="7" y="0.5" width="2" height="1.2"/>
  <text x="1" y="1">TOP</text>
</svg>
`;
