/** How much one import may be. Fastify's body limit does not cover bodies that are read as streams, so these are counted here. */

export interface ImportLimits {
  /** bytes of the whole file */
  readonly bytes: number;
  /** rows of the file, blank ones and the header included */
  readonly rows: number;
  /** characters of one row: a CSV record, a line of NDJSON, an element of a JSON array */
  readonly rowLength: number;
}

export const IMPORT_LIMITS: ImportLimits = {
  // a lamp is some hundred bytes, one with a table of 64 points about 2 KiB: a hundred thousand of those
  bytes: 256 * 1024 * 1024,
  rows: 500_000,
  // the longest honest row is a phase table of 720 points, about 32 KiB
  rowLength: 128 * 1024,
};

/** Each import holds a file's pieces in memory and takes its turns on the one thread; more of them only make all of them slower. */
export const MOST_IMPORTS_AT_ONCE = 2;
