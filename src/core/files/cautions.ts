/** The usual cautions, shown wherever work at the machine or the bath begins. Signal words as ANSI Z535.4 grades them. */
export const CAUTIONS: readonly { word: string; text: string }[] = [
  {
    word: 'DANGER: open class 4 laser.',
    text: 'Direct, reflected and scattered light can blind and burn. Follow IEC 60825-1, local codes and your laser safety officer: enclosure, interlocks, eyewear for this wavelength.',
  },
  {
    word: 'WARNING: caustic bath.',
    text: 'Electroless copper baths are strongly alkaline and may hold formaldehyde. Use gloves, goggles and extraction, keep to the bath’s safety data sheet and local rules, and never plate alone.',
  },
  {
    word: 'WARNING: fumes.',
    text: 'Laser-written plastic gives off fumes and fine dust. Extract and filter them as your shop’s rules say.',
  },
  {
    word: 'NOTICE.',
    text: 'No number here is a safety limit. Licensed practice and the shop’s own rules come first.',
  },
];
