/** A Gerber file as blocks of text with their places (Gerber layer format, 2022.02, ch. 3.2: words, commands, blocks). */

export interface Block {
  /** Without its `*`, line ends and spaces around it; never empty. */
  text: string;
  /** From 1; of its first letter. */
  line: number;
  /** Stood between two `%`. */
  extended: boolean;
  /** The first of its pair of `%`: a macro's lines stand in the same pair as its name. */
  first: boolean;
  /** Had its `*`. */
  ended: boolean;
}

/** Every character of the text is in some block, but for line ends, `*`, `%` and spaces around blocks. */
export function* blocks(text: string): Generator<Block> {
  let line = 1;
  let extended = false;
  let first = false;
  let at = 0;
  while (at < text.length) {
    const c = text.charCodeAt(at);
    if (c === NEW_LINE || (c === RETURN && text.charCodeAt(at + 1) !== NEW_LINE)) line++;
    if (c <= SPACE || c === STAR || c === MARK) {
      at++;
      continue;
    }
    if (c === PERCENT) {
      extended = !extended;
      first = extended;
      at++;
      continue;
    }
    const from = at;
    const begun = line;
    let broken = false;
    let end = text.charCodeAt(at);
    while (at < text.length && end !== STAR && end !== PERCENT) {
      if (end === NEW_LINE || end === RETURN) {
        broken = true;
        if (end === NEW_LINE || text.charCodeAt(at + 1) !== NEW_LINE) line++;
      }
      at++;
      end = text.charCodeAt(at);
    }
    const raw = text.slice(from, at);
    yield {
      text: broken ? raw.replace(/[\r\n]/g, '').trim() : raw.trim(),
      line: begun,
      extended,
      first,
      ended: end === STAR,
    };
    first = false;
  }
}

const NEW_LINE = 10;
const RETURN = 13;
const SPACE = 32;
const PERCENT = 37;
const STAR = 42;
/** Byte order mark, which some editors put first. */
const MARK = 0xfeff;
