/** Reads ngspice's binary raw file: a text header, then one row of doubles for each accepted time point. */

export interface RawTable {
  readonly rows: number;
  /** by vector name in lower case, as the file gives it; `time` is one of them */
  readonly columns: ReadonlyMap<string, Float64Array>;
}

export function readRaw(file: Buffer): RawTable {
  const marker = file.indexOf('Binary:\n');
  if (marker < 0) throw new Error('not a binary raw file');
  const header = file.subarray(0, marker).toString('latin1');
  const count = Number(/No\. Variables:\s*(\d+)/.exec(header)?.[1]);
  const names = [...header.matchAll(/^\t\d+\t(\S+)\t/gm)].map((match) => (match[1] as string).toLowerCase());
  if (names.length !== count) throw new Error(`raw file names ${names.length} of ${count} vectors`);
  const body = file.subarray(marker + 'Binary:\n'.length);
  // a run that was cut short leaves the header's row count behind the truth
  const rows = Math.floor(body.length / (8 * count));
  const columns = names.map(() => new Float64Array(rows));
  const view = new DataView(body.buffer, body.byteOffset, body.length);
  for (let row = 0, at = 0; row < rows; row++) {
    for (let column = 0; column < count; column++, at += 8) (columns[column] as Float64Array)[row] = view.getFloat64(at, true);
  }
  return { rows, columns: new Map(names.map((name, index) => [name, columns[index] as Float64Array])) };
}
