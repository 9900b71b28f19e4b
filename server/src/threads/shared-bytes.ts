/** Bytes in memory that threads share instead of copying. */
export function sharedBytes(from: Uint8Array): Uint8Array {
  const copy = new Uint8Array(new SharedArrayBuffer(from.length));
  copy.set(from);
  return copy;
}
