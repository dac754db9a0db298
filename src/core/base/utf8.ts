/** UTF-8 without TextEncoder, which the core's own library set does not promise. */
export function encodeUtf8(text: string): Uint8Array {
  const out = new Uint8Array(text.length * 3);
  let n = 0;
  for (let i = 0; i < text.length; i++) {
    const c = text.codePointAt(i)!;
    if (c > 0xffff) i++;
    if (c < 0x80) out[n++] = c;
    else if (c < 0x800) {
      out[n++] = 0xc0 | (c >> 6);
      out[n++] = 0x80 | (c & 63);
    } else if (c < 0x10000) {
      out[n++] = 0xe0 | (c >> 12);
      out[n++] = 0x80 | ((c >> 6) & 63);
      out[n++] = 0x80 | (c & 63);
    } else {
      out[n++] = 0xf0 | (c >> 18);
      out[n++] = 0x80 | ((c >> 12) & 63);
      out[n++] = 0x80 | ((c >> 6) & 63);
      out[n++] = 0x80 | (c & 63);
    }
  }
  return out.slice(0, n);
}

/** @returns text; bytes that are no UTF-8 come out as U+FFFD */
export function decodeUtf8(bytes: Uint8Array): string {
  const parts: string[] = [];
  let chunk: number[] = [];
  for (let i = 0; i < bytes.length; ) {
    const b = bytes[i];
    const extra =
      b < 0x80 ? 0 : b >= 0xc2 && b < 0xe0 ? 1 : b >= 0xe0 && b < 0xf0 ? 2 : b >= 0xf0 && b < 0xf5 ? 3 : -1;
    let code = extra === 0 ? b : extra > 0 ? b & (0x3f >> extra) : 0xfffd;
    let used = 1;
    if (extra > 0) {
      for (let k = 1; k <= extra; k++) {
        const c = bytes[i + k];
        if (c === undefined || (c & 0xc0) !== 0x80) {
          code = 0xfffd;
          break;
        }
        code = (code << 6) | (c & 63);
        used++;
      }
      if (used !== extra + 1) code = 0xfffd;
    }
    i += used;
    if (code > 0xffff) chunk.push(0xd800 + ((code - 0x10000) >> 10), 0xdc00 + ((code - 0x10000) & 0x3ff));
    else chunk.push(code);
    if (chunk.length > 8000) {
      parts.push(String.fromCharCode(...chunk));
      chunk = [];
    }
  }
  parts.push(String.fromCharCode(...chunk));
  return parts.join('');
}
