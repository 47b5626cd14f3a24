/**
 * CSV lists as they come: what each row becomes, and what the catalogue then holds. The lamps belong to a guest house that is being
 * refitted; none of them is anybody's product.
 */

export interface CsvCase {
  readonly title: string;
  readonly csv: string | Buffer;
  readonly type?: string;
  readonly query?: string;
  /** `row outcome paths…` for each row */
  readonly outcomes: readonly string[];
  /** entries by id, as stored, where the case is about what was read */
  readonly stored?: { readonly [id: string]: unknown };
  /** what the issues of a refused row say, by row */
  readonly says?: { readonly [row: number]: RegExp };
}

const RESISTIVE = 'id,ratedPower_W,load.kind';

/** A resistive lamp of some watts, as stored. */
const watts = (ratedPower_W: number) => ({ lamp: { ratedPower_W, load: { kind: 'resistive' } } });

export const CSV_CASES: readonly CsvCase[] = [
  {
    title: 'commas between cells and points in numbers',
    csv: `${RESISTIVE}\nhall,40.5,resistive\nattic,25,resistive\n`,
    outcomes: ['2 created', '3 created'],
    stored: { hall: watts(40.5), attic: watts(25) },
  },
  {
    title: 'a list that ends without a line break',
    csv: `${RESISTIVE}\nhall,40,resistive`,
    outcomes: ['2 created'],
  },
  {
    title: 'semicolons, decimal commas, a byte-order mark and CRLF, as spreadsheets in much of Europe write them',
    csv: '\ufeffid;name;ratedPower_W;load.kind;load.points\r\nhall;Flur „Süd“;7,5;iv-table;0:0 60:0,25 325:52,5\r\n',
    outcomes: ['2 created'],
    stored: {
      hall: {
        name: 'Flur „Süd“',
        lamp: {
          ratedPower_W: 7.5,
          load: {
            kind: 'iv-table',
            points: [
              { voltage_V: 0, current_mA: 0 },
              { voltage_V: 60, current_mA: 0.25 },
              { voltage_V: 325, current_mA: 52.5 },
            ],
          },
        },
      },
    },
  },
  {
    title: 'tabs and UTF-16 with its mark, as "Unicode text" is saved',
    csv: Buffer.from('\ufeffid\tname\tload.kind\tload.resistance_Ohm\r\nhall\tGästezimmer\tresistive\t960,5\r\n', 'utf16le'),
    outcomes: ['2 created'],
    stored: { hall: { name: 'Gästezimmer', lamp: { load: { kind: 'resistive', resistance_Ohm: 960.5 } } } },
  },
  {
    title: 'windows-1252 where the type says so',
    csv: Buffer.from('id;name;load.kind;load.resistance_Ohm\r\nhall;K\u00fcche;resistive;960\r\n', 'latin1'),
    type: 'text/csv; charset=Windows-1252',
    outcomes: ['2 created'],
    stored: { hall: { name: 'Küche', lamp: { load: { kind: 'resistive', resistance_Ohm: 960 } } } },
  },
  {
    title: 'a line that says the separator before the header',
    csv: `sep=;\r\n${RESISTIVE.replaceAll(',', ';')}\r\nhall;40;resistive\r\n`,
    outcomes: ['3 created'],
  },
  {
    title: 'carriage returns alone, as old machines write them',
    csv: `${RESISTIVE}\rhall,40,resistive\rattic,25,resistive\r`,
    outcomes: ['2 created', '3 created'],
  },
  {
    title: 'quoted line breaks, separators and quotes, each row still counted once',
    csv: 'id,note,load.kind,load.resistance_Ohm\n"hall","first line\nsecond, ""quoted""",resistive,960\nattic,plain,resistive,960\n',
    outcomes: ['2 created', '3 created'],
    stored: { hall: { note: 'first line\nsecond, "quoted"', lamp: { load: { kind: 'resistive', resistance_Ohm: 960 } } } },
  },
  {
    title: 'empty cells, which are values not given and never zeros',
    csv: 'id,name,tags,ratedPower_W,load.kind,load.resistance_Ohm,input.capacitance_nF,input.inductance_mH\nhall,,,40,resistive,,,0\n',
    outcomes: ['2 created'],
    stored: { hall: { lamp: { ratedPower_W: 40, load: { kind: 'resistive' }, input: { inductance_mH: 0 } } } },
  },
  {
    title: 'blank rows, which are counted as a spreadsheet counts them and have no outcome',
    csv: `${RESISTIVE}\n\n,,\nhall,40,resistive\n  ,\t,\nattic,25,resistive\n\n`,
    outcomes: ['4 created', '6 created'],
  },
  {
    title: 'columns that were used once: separators at the ends of lines',
    csv: `${RESISTIVE},,\nhall,40,resistive,,\nattic,25,resistive,,,\n`,
    outcomes: ['2 created', '3 created'],
  },
  {
    title: 'rows with too few or too many cells, which may have slipped sideways',
    csv: `${RESISTIVE}\nhall,40\nattic,25,resistive,surplus\ncellar,60,resistive\n`,
    outcomes: ['2 refused', '3 refused', '4 created'],
    says: { 2: /has 2 cells, where the header has 3/, 3: /has 4 cells/ },
  },
  {
    title: 'an id twice: the second is refused and names the row of the first',
    csv: `${RESISTIVE}\nhall,40,resistive\nattic,25,resistive\nhall,60,resistive\nhall,60,resistive\n`,
    outcomes: ['2 created', '3 created', '4 refused id', '5 refused id'],
    stored: { hall: watts(40) },
    says: { 4: /is the id of row 2 as well/, 5: /row 2/ },
  },
  {
    title: 'an id twice of which the first row is wrong: nobody knows which was meant',
    csv: `${RESISTIVE}\nhall,0,resistive\nhall,60,resistive\n`,
    outcomes: ['2 refused lamp.ratedPower_W', '3 refused id'],
  },
  {
    title: 'the same lamp as is there already',
    csv: `${RESISTIVE}\nalready-there,40,resistive\n`,
    outcomes: ['2 unchanged'],
  },
  {
    title: 'a lamp that differs from the one that is there',
    csv: `${RESISTIVE}\nalready-there,60,resistive\n`,
    outcomes: ['2 revised'],
    stored: { 'already-there': watts(60) },
  },
  {
    title: 'ids, numbers, kinds and tables that are wrong, each with its place',
    csv: [
      'id,ratedPower_W,load.kind,load.points,input.bleeder.kind',
      ',8,resistive,,',
      'no space,8,resistive,,',
      'a,much,resistive,,',
      'b,8,iv-table,0:0 60,',
      'c,8,iv-table,0:0 60:x,',
      'd,8,iv-table,0:0 60:1 50:2,',
      'e,8,halogen,,',
      'f,8,resistive,,active',
      'g,1e400,resistive,,',
      'h,0x10,resistive,,',
      'i,,,,',
    ].join('\n'),
    outcomes: [
      '2 refused id',
      '3 refused id',
      '4 refused lamp.ratedPower_W',
      '5 refused lamp.load.points',
      '6 refused lamp.load.points',
      '7 refused lamp.load.points[2].voltage_V',
      '8 refused lamp.load.kind',
      '9 refused lamp.input.bleeder.current_mA lamp.input.bleeder.below_V',
      '10 refused lamp.ratedPower_W',
      '11 refused lamp.ratedPower_W',
      '12 refused lamp.load',
    ],
    says: {
      2: /is missing/,
      4: /is "much", which is not a number/,
      5: /holds "60", which is not a pair voltage_V:current_mA/,
      6: /its current_mA is "x", which is not a number/,
      8: /must be one of "resistive"/,
      10: /beyond any number/,
    },
  },
  {
    title: 'parts that are absent, and parts in two ways at once',
    csv: [
      'id,load.kind,load.resistance_Ohm,input.damper,input.damper.resistance_Ohm,input.damper.capacitance_nF',
      'hall,resistive,960,null,,',
      'attic,resistive,960,,100,47',
      'cellar,resistive,960,null,100,47',
      'porch,resistive,960,none,,',
    ].join('\n'),
    outcomes: [
      '2 created',
      '3 created',
      '4 refused lamp.input.damper.resistance_Ohm lamp.input.damper.capacitance_nF',
      '5 refused lamp.input.damper',
    ],
    stored: { hall: { lamp: { load: { kind: 'resistive', resistance_Ohm: 960 }, input: { damper: null } } } },
    says: { 4: /is given together with lamp\.input\.damper: one or the other/, 5: /takes null.*nothing else/ },
  },
  {
    title: 'tags, in their order and without their spaces',
    csv: `${RESISTIVE},tags\nhall,40,resistive,warm | hall\nattic,40,resistive,warm|warm\n`,
    outcomes: ['2 created', '3 refused tags'],
    stored: { hall: { tags: ['hall', 'warm'], ...watts(40) } },
  },
  {
    title: 'a phase table, whose points are phases because its kind says so',
    csv: `id;load.voltage_V;load.frequency_Hz;load.points;load.kind\nhall;230;50;${Array.from({ length: 19 }, (_, index) => `${index * 10}:${index},5`).join(' ')};phase-table\n`,
    outcomes: ['2 created'],
  },
  {
    title: 'column names with the `lamp.` of the entry before them',
    csv: 'id,lamp.ratedPower_W,lamp.load.kind\nhall,40,resistive\n',
    outcomes: ['2 created'],
    stored: { hall: watts(40) },
  },
];

/** The decimal mark of a list: what is read of the numbers of a list, or why one is refused. */
export interface DecimalCase {
  readonly title: string;
  readonly separator: ',' | ';' | '\t';
  readonly query?: string;
  readonly cells: readonly string[];
  /** the number that was stored, or what the refusal says */
  readonly read: readonly (number | RegExp)[];
}

export const DECIMAL_CASES: readonly DecimalCase[] = [
  { title: 'a point between commas', separator: ',', cells: ['7.5', '1.234'], read: [7.5, 1.234] },
  {
    title: 'a comma in quotes between commas',
    separator: ',',
    cells: ['"7,5"'],
    read: [/with a comma, where the decimal mark is a point/],
  },
  {
    title: 'a comma in quotes between commas, announced',
    separator: ',',
    query: '?decimal=comma',
    cells: ['"7,5"', '7.5'],
    read: [7.5, /with a point/],
  },
  { title: 'a comma between semicolons', separator: ';', cells: ['7,5', '3', '12,25'], read: [7.5, 3, 12.25] },
  { title: 'a point between semicolons', separator: ';', cells: ['7.5', '12.25'], read: [7.5, 12.25] },
  {
    title: 'both marks in one list',
    separator: ';',
    cells: ['7,5', '7.5', '8,5'],
    read: [7.5, /is "7\.5", with a point, where the decimal mark is a comma \(row 2\)/, 8.5],
  },
  {
    title: 'a thousands point after a decimal comma',
    separator: ';',
    cells: ['7,5', '1.234'],
    read: [7.5, /with a point, where the decimal mark is a comma/],
  },
  {
    title: 'thousands or three decimals, nobody knows',
    separator: ';',
    cells: ['1.234', '12,500'],
    read: [/read as 1\.234 and as 1234/, /read as 12\.500 and as 12500/],
  },
  { title: 'three decimals once the mark is known', separator: ';', cells: ['7,5', '1,234'], read: [7.5, 1.234] },
  { title: 'three decimals where the mark is announced', separator: '\t', query: '?decimal=point', cells: ['1.234'], read: [1.234] },
  { title: 'three decimals that are no thousands', separator: ';', cells: ['0,125', '1,5'], read: [0.125, 1.5] },
  { title: 'thousands and decimals at once', separator: ';', cells: ['1.234,5', '1 234'], read: [/is not a number/, /is not a number/] },
  { title: 'an exponent', separator: ';', cells: ['1,5E2', '1.5e2'], read: [150, /with a point/] },
];

/** Headers that are refused before any row is read: the paths that are named. */
export const HEADER_CASES: readonly (readonly [title: string, header: string, kind: 'lamps' | 'dimmers', paths: readonly string[]])[] = [
  ['a column that does not exist', 'id,load.kind,wattage', 'lamps', ['wattage']],
  ['a misspelt column', 'id,load.kind,ratedpower', 'lamps', ['ratedpower']],
  ['a column twice', 'id,load.kind,name,name', 'lamps', ['name']],
  ['a column twice, once with its prefix', 'id,load.kind,lamp.load.kind', 'lamps', ['load.kind']],
  ['no id', 'name,load.kind', 'lamps', ['id']],
  ['nothing of what every lamp needs', 'id,name', 'lamps', ['load']],
  ['nothing of what every dimmer needs', 'id,name', 'dimmers', ['latchingCurrent_mA', 'holdingCurrent_mA']],
  ['columns of the other kind of list', 'id,load.kind', 'dimmers', ['load.kind', 'latchingCurrent_mA', 'holdingCurrent_mA']],
  ['a blank name between others', 'id,,load.kind', 'lamps', ['']],
  ['data instead of a header', 'hall,40,resistive', 'lamps', ['hall', '40', 'resistive', 'id', 'load']],
  ['a name that every object has', 'id,load.kind,constructor', 'lamps', ['constructor']],
  ['a name that reaches for the prototype', 'id,load.kind,__proto__.x', 'lamps', ['__proto__.x']],
];
