/**
 * Plain data with byte arrays in it as one message, for hosts that are reached over HTTP:
 * a 4-byte length, JSON in which byte arrays are `{"$bytes": n}`, then the arrays.
 */

export function pack(value: unknown): Uint8Array<ArrayBuffer> {
  const blobs: Uint8Array[] = [];
  const json = new TextEncoder().encode(
    JSON.stringify(value, (_key, v: unknown) =>
      v instanceof Uint8Array ? { $bytes: blobs.push(v) - 1, length: v.length } : v,
    ),
  );
  const total = blobs.reduce((n, b) => n + b.length, 4 + json.length);
  const out = new Uint8Array(total);
  new DataView(out.buffer).setUint32(0, json.length);
  out.set(json, 4);
  let at = 4 + json.length;
  for (const b of blobs) {
    out.set(b, at);
    at += b.length;
  }
  return out;
}

/** @throws RangeError or SyntaxError when the message is not one of ours */
export function unpack(message: Uint8Array): unknown {
  const size = new DataView(message.buffer, message.byteOffset, message.byteLength).getUint32(0);
  if (4 + size > message.length) throw new RangeError('message cut short');
  let at = 4 + size;
  return JSON.parse(new TextDecoder().decode(message.subarray(4, 4 + size)), (_key, v: unknown) => {
    if (typeof v !== 'object' || v === null || !('$bytes' in v)) return v;
    const length = (v as { length?: unknown }).length;
    if (typeof length !== 'number' || length < 0 || at + length > message.length)
      throw new RangeError('message cut short');
    const blob = message.slice(at, at + length);
    at += length;
    return blob;
  });
}
