import { constants, deflateRawSync } from 'node:zlib';

/** Raw deflate (RFC 1951) of bytes that are known to begin with some that cannot become shorter. */

const mostInStoredBlock = 0xffff;
const sampled = 4096;
/** Bits per byte from which on it is not worth the time. Of so many evenly spread bytes the estimate is 7.96. */
const enough = 7.9;

/** Whether bytes are spread so evenly that a code for them gains nothing: by the entropy of some of them. */
export function saysNothing(bytes: Uint8Array, from: number, length: number): boolean {
  if (length < sampled) return false;
  const counts = new Uint32Array(256);
  const step = Math.floor(length / sampled);
  for (let taken = 0, at = from; taken < sampled; taken++, at += step) counts[bytes[at]]++;
  let bits = 0;
  for (const count of counts) if (count > 0) bits -= count * Math.log2(count / sampled);
  return bits >= enough * sampled;
}

/**
 * The bytes before `first` in stored blocks (RFC 1951, 3.2.4), those up to `end` deflated behind them: one stream, which any inflate reads.
 *
 * @returns bytes in memory of their own
 */
export function deflateFrom(bytes: Uint8Array, first: number, end: number): Buffer {
  const rest = bytes.subarray(first, end);
  // Runs and frequencies are what there is to gain; a search for longer repetitions takes three times as long and finds little in planes.
  const options = { level: 1, strategy: constants.Z_RLE, chunkSize: Math.max(64, rest.length + 1024) };
  const deflated = deflateRawSync(rest, options);
  if (first === 0) return deflated;
  const blocks = Math.ceil(first / mostInStoredBlock);
  const whole = Buffer.allocUnsafeSlow(first + 5 * blocks + deflated.length);
  let at = 0;
  for (let from = 0; from < first; from += mostInStoredBlock) {
    const length = Math.min(mostInStoredBlock, first - from);
    // Not the last block, stored; then the length and its complement.
    whole[at] = 0;
    whole.writeUInt16LE(length, at + 1);
    whole.writeUInt16LE(length ^ 0xffff, at + 3);
    whole.set(bytes.subarray(from, from + length), at + 5);
    at += 5 + length;
  }
  whole.set(deflated, at);
  return whole;
}
