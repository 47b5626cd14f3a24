/** Rows of text become columns in SI units; every fault names its row and column. */
import { describe, expect, test } from 'vitest';
import { NOTHING_STATED, readScopeColumns, type StatedColumns, separatorOf } from '../../model/profiles/scope-columns.ts';

const numbers = [
  ['0', '1,5', '-2'],
  ['0.001', '2.5e2', '+3'],
];

function columns(rows: readonly (readonly string[])[], stated: StatedColumns = NOTHING_STATED) {
  const read = readScopeColumns(rows, stated);
  if (!read.ok) throw new Error(read.failure.detail);
  return [read.value.time, read.value.voltage, read.value.current].map((column) => Array.from(column));
}

function fault(rows: readonly (readonly string[])[], stated: StatedColumns = NOTHING_STATED) {
  const read = readScopeColumns(rows, stated);
  return read.ok ? { kind: 'read', detail: '' } : read.failure;
}

const stating = (units: Partial<StatedColumns['units']>, places: Partial<StatedColumns['places']> = {}): StatedColumns => ({
  units: { ...NOTHING_STATED.units, ...units },
  places: { ...NOTHING_STATED.places, ...places },
});
const si = { time: 's', voltage: 'V', current: 'A' };

describe('the columns of a scope record', () => {
  test.each([
    ['names with suffixes', [['time_s', 'voltage_V', 'current_mA']], 1e-3],
    ['names with units in brackets', [['Time (s)', 'Voltage [V]', 'Current (mA)']], 1e-3],
    ['short names', [['t/s', 'u/V', 'i/A']], 1],
    [
      'names above units',
      [
        ['time', 'voltage', 'current'],
        ['s', 'V', 'mA'],
      ],
      1e-3,
    ],
    ['bare units', [['s', 'V', 'A']], 1],
    ['channels with units', [['TIME s', 'CH1 (V)', 'CH2 (A)']], 1],
  ])('are read under a header of %s', (_, header, unit) => {
    expect(columns([...header, ...numbers])).toEqual([
      [0, 0.001],
      [1.5, 250],
      [-2 * unit, 3 * unit],
    ]);
  });

  test('may be followed by a comma that ends each row', () => {
    const rows = [
      ['time_s', 'voltage_V', 'current_A'],
      ['5', '230', '1', ''],
    ];
    expect(columns(rows)).toEqual([[5], [230], [1]]);
  });

  test('are found by name in any order, between others', () => {
    const rows = [
      ['current_A', 'trigger', 'time_ms', 'voltage_V'],
      ['1', '9', '5', '230'],
    ];
    expect(columns(rows)).toEqual([[0.005], [230], [1]]);
  });

  test('without a header are taken as time, voltage, current in the stated units', () => {
    expect(columns([['20', '0,23', '50']], stating({ time: 'ms', voltage: 'kV', current: 'mA' }))).toEqual([[0.02], [230], [0.05]]);
  });

  test('are taken from the stated places', () => {
    const stated = stating(si, { time: 3, voltage: 1, current: 0 });
    expect(columns([['1', '230', 'x', '5']], stated)).toEqual([[5], [230], [1]]);
  });

  test.each(['us', 'µs', 'μs'])('understand a microsecond written %s', (unit) => {
    expect(
      columns([
        [`time (${unit})`, 'voltage (V)', 'current (A)'],
        ['5', '1', '1'],
      ])[0],
    ).toEqual([5e-6]);
  });

  test('name the first row of numbers, so that later messages count from there', () => {
    const read = readScopeColumns([['time_s', 'voltage_V', 'current_A'], ...numbers]);
    expect(read.ok && read.value.firstRow).toBe(2);
  });

  test.each<[string, (readonly string[])[], StatedColumns, string]>([
    ['nothing but a header', [['time_s', 'voltage_V', 'current_A']], NOTHING_STATED, 'no rows of numbers'],
    ['no rows at all', [], NOTHING_STATED, 'no rows of numbers'],
    ['a field that is no number', [...numbers, ['0.002', '1', 'abc']], stating(si), 'Row 3: the current is no number: "abc"'],
    ['an empty field', [...numbers, ['0.002', '', '1']], stating(si), 'Row 3: the voltage is empty'],
    ['thousands separators', [...numbers, ['0.002', '1.234,5', '1']], stating(si), 'Row 3: the voltage is no number'],
    ['a short row', [...numbers, ['0.002', '1']], stating(si), 'Row 3 has 2 fields'],
    [
      'decimal commas among separating ones',
      [
        ['time_s', 'voltage_V', 'current_A'],
        ['0', '0001', '3', '5', '0', '1'],
      ],
      NOTHING_STATED,
      'Row 2 has 6 fields where the header has 3. Where the decimal mark is a comma, semicolons or tabs must separate',
    ],
    ['no unit', numbers, stating({ time: 's', voltage: 'V' }), 'The unit of the current column is not known'],
    ['a unit of another quantity', numbers, stating({ ...si, current: 'V' }), 'cannot be in V'],
    [
      'a unit stated against the header',
      [['time_s', 'voltage_V', 'current_mA'], ...numbers],
      stating({ current: 'A' }),
      'headed in mA but stated in A',
    ],
    ['a header without a current', [['time_s', 'voltage_V', 'other'], ...numbers], NOTHING_STATED, 'The current column is not to be found'],
    ['four columns without a header', [['1', '2', '3', '4']], stating(si), 'has 4 columns and no header'],
    ['two voltages', [['time_s', 'voltage_V', 'voltage_V'], ...numbers], NOTHING_STATED, 'Columns 2 and 3 are both headed as voltage'],
    ['a stated place beyond the row', numbers, stating(si, { time: 0, voltage: 1, current: 3 }), 'stated as column 4'],
    ['one place stated twice', numbers, stating(si, { time: 0, voltage: 1, current: 1 }), 'three different columns'],
    ['a third header row', [['a', 'b', 'c'], ['s', 'V', 'A'], ['x', 'y', 'z'], ...numbers], NOTHING_STATED, 'Row 3'],
  ])('are refused with %s', (_, rows, stated, said) => {
    expect(fault(rows, stated)).toMatchObject({ kind: 'unreadable-record', detail: expect.stringContaining(said) });
  });
});

test.each([
  ['a,b,c\n1,2,3', ','],
  ['a;b;c\n1,5;2;3', ';'],
  ['a\tb\tc\n1,5\t2;\t3', '\t'],
])('the separator of %j is %j', (text, separator) => {
  expect(separatorOf(text)).toBe(separator);
});
