/** Reading a file's bytes as text: UTF-8, UTF-16 with or without its mark, and otherwise Windows-1252. */

/** @typedef {{ text: string, encoding: 'UTF-8'|'UTF-16'|'Windows-1252' }} Decoded */

/**
 * The text in `bytes` and the encoding it was read with. Any sequence of bytes has an answer.
 * @param {Uint8Array} bytes
 * @returns {Decoded}
 */
export function decode(bytes) {
  const wide = wideEncoding(bytes);
  if (wide) return { text: new TextDecoder(wide).decode(bytes), encoding: 'UTF-16' };
  try {
    return { text: new TextDecoder('utf-8', { fatal: true }).decode(bytes), encoding: 'UTF-8' };
  } catch {
    return { text: new TextDecoder('windows-1252').decode(bytes), encoding: 'Windows-1252' };
  }
}

/**
 * The label of a two-byte encoding, if the bytes look like one. Text of a table is mostly ASCII, so without a mark
 * every second byte of it is zero, and in no other encoding of text is any.
 * @param {Uint8Array} bytes
 * @returns {'utf-16le'|'utf-16be'|null}
 */
function wideEncoding(bytes) {
  if (bytes[0] === 0xff && bytes[1] === 0xfe) return 'utf-16le';
  if (bytes[0] === 0xfe && bytes[1] === 0xff) return 'utf-16be';
  const length = Math.min(bytes.length, 2000) & ~1;
  const zeros = [0, 0];
  for (let i = 0; i < length; i += 1) {
    if (bytes[i] === 0) zeros[i & 1] = (zeros[i & 1] ?? 0) + 1;
  }
  const [first = 0, second = 0] = zeros;
  if (length < 4 || first + second < length / 5) return null;
  return second > first ? 'utf-16le' : 'utf-16be';
}
