/** Text line by line, without an array of all lines. */
export function* lines(text: string): Generator<{ text: string; line: number }> {
  let from = 0;
  for (let line = 1; from < text.length; line++) {
    let to = from;
    while (to < text.length && text.charCodeAt(to) !== 10 && text.charCodeAt(to) !== 13) to++;
    yield { text: text.slice(from, to), line };
    from = to + (text.charCodeAt(to) === 13 && text.charCodeAt(to + 1) === 10 ? 2 : 1);
  }
}
