/** Text line by line, without an array of all lines; ends are LF, CR LF or, in files that have neither, CR. */
export function* lines(text: string): Generator<{ text: string; line: number }> {
  const end = text.includes('\n') ? '\n' : '\r';
  let from = 0;
  for (let line = 1; from < text.length; line++) {
    const next = text.indexOf(end, from);
    const to = next < 0 ? text.length : next;
    yield { text: text.slice(from, text[to - 1] === '\r' ? to - 1 : to), line };
    from = to + 1;
  }
}
