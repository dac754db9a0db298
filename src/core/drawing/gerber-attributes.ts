/** Attributes of Gerber X2 (2022.02, ch. 5) as far as they say what copper belongs to; others change no copper. */

export interface Attributes {
  /** `.FileFunction`, such as `Copper,L1,Top`; null where the file does not say. */
  fileFunction: string | null;
  /** `.FilePolarity` is negative. */
  negative: boolean;
  net: string | null;
  /** `part-pin` */
  pin: string | null;
}

export const noAttributes = (): Attributes => ({ fileFunction: null, negative: false, net: null, pin: null });

/**
 * Reads `TF`, `TA`, `TO` and `TD` into `now`.
 * @param text  such as `TO.N,SENSE1`
 * @returns false where it is none of these
 */
export function readAttribute(text: string, now: Attributes): boolean {
  const m = /^(T[FAOD])([^,]*)(?:,(.*))?$/.exec(text);
  if (!m) return false;
  const [, command, name] = m;
  const values = (m[3] ?? '').split(',').map(plain);
  if (command === 'TD') {
    if (name === '' || name === '.N') now.net = null;
    if (name === '' || name === '.P') now.pin = null;
  } else if (command === 'TF' && name === '.FileFunction') now.fileFunction = values.join(',');
  else if (command === 'TF' && name === '.FilePolarity') now.negative = /^negative$/i.test(values[0]);
  else if (command === 'TO' && name === '.N')
    now.net = values[0] === '' || values[0] === 'N/C' ? null : values[0];
  else if (command === 'TO' && name === '.P')
    now.pin = values.length >= 2 ? `${values[0]}-${values[1]}` : null;
  return true;
}

/** `\u002C` stands for a comma, and so on. */
const plain = (text: string): string =>
  text
    .trim()
    .replace(/\\(?:u([0-9A-Fa-f]{4})|U([0-9A-Fa-f]{8}))/g, (whole, four?: string, eight?: string) => {
      const code = Number.parseInt(four ?? eight ?? '', 16);
      return code <= 0x10ffff ? String.fromCodePoint(code) : whole;
    });
