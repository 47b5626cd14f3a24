/**
 * Small arrays of numbers, cut from large blocks. The engine makes dozens for every mode, most of them too long for the heap's own
 * pages, and an array with a buffer of its own takes some twenty times as long to make as a view of a block. A block lives as long as
 * any array cut from it, so none of these arrays may leave the model (sent to another thread it would take its whole block along).
 */

/** numbers in a block: 64 KiB */
const BLOCK = 8192;

let block = new ArrayBuffer(8 * BLOCK);
let used = 0;

/** an array of so many zeros */
export function numbers(length: number): Float64Array {
  if (length > BLOCK / 8) return new Float64Array(length);
  if (used + length > BLOCK) {
    block = new ArrayBuffer(8 * BLOCK);
    used = 0;
  }
  const made = new Float64Array(block, 8 * used, length);
  used += length;
  return made;
}

/** an array with the numbers of another */
export function copied(from: Float64Array): Float64Array {
  const made = numbers(from.length);
  made.set(from);
  return made;
}
