const littleEndian = new Uint8Array(new Uint16Array([1]).buffer)[0] === 1;

/**
 * Copies numbers and turns them between the machine's byte order and that of FITS, which is
 * big-endian. Applied twice it changes nothing.
 *
 * @param bytes The numbers' bytes.
 * @param width Bytes of one number: 1, 2, 4 or 8.
 * @returns A fresh buffer, so aligned for every typed array.
 */
export function turnByteOrder(bytes: Uint8Array, width: number): ArrayBuffer {
  const copy = new Uint8Array(bytes).buffer;
  if (!littleEndian || width === 1) return copy;
  if (width === 2) {
    const words = new Uint16Array(copy);
    for (let k = 0; k < words.length; k++) words[k] = words[k]! << 8 | words[k]! >>> 8;
    return copy;
  }
  const words = new Uint32Array(copy);
  for (let k = 0; k < words.length; k++) {
    const word = words[k]!;
    words[k] = word << 24 | (word & 0xff00) << 8 | word >>> 8 & 0xff00 | word >>> 24;
  }
  if (width === 8) {
    for (let k = 0; k < words.length; k += 2) {
      const high = words[k]!;
      words[k] = words[k + 1]!;
      words[k + 1] = high;
    }
  }
  return copy;
}
