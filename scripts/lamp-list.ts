/** Writes long lists of lamps as a shop's catalogue might hold them, for measuring imports: the same list for the same number. */

const HEADER =
  'id;articleNumber;name;tags;ratedPower_W;load.kind;load.points;load.power_W;load.capacitance_uF;load.minimumVoltage_V;input.seriesResistance_Ohm;input.capacitance_nF';

/** rows a piece, so that a file is written without being held */
const PIECE = 500;

const ROOMS = ['attic', 'bedroom', 'breakfast', 'cellar', 'hall', 'landing', 'porch', 'stairs'];
const SHAPES = ['candle', 'globe', 'reflector', 'tube'];

export function* lampListCsv(rows: number): Generator<string> {
  yield `${HEADER}\r\n`;
  for (let from = 0; from < rows; from += PIECE) {
    const count = Math.min(PIECE, rows - from);
    yield Array.from({ length: count }, (_, index) => `${lampLine(from + index)}\r\n`).join('');
  }
}

/** Two thirds with a table of current over voltage, one third plain drivers with a reservoir. */
function lampLine(number: number): string {
  const power = 3 + (number % 23) * 0.5;
  const room = ROOMS[number % ROOMS.length];
  const shape = SHAPES[Math.floor(number / 7) % SHAPES.length];
  const texts = [`lamp-${number}`, `GH-${100_000 + number}`, `${room} ${shape} ${comma(power)} W`, `${room}|${shape}`, comma(power)];
  const peak = (power / 230) * 1.9 * 1000;
  const table = [
    'iv-table',
    `0:0 60:0 ${180 + (number % 40)}:${comma(peak * 0.4)} 325:${comma(peak)}`,
    '',
    '',
    '',
    '22',
    comma(33 + (number % 5) * 7),
  ];
  const reservoir = ['reservoir', '', comma(power * 0.9), comma(2.2 + (number % 4)), '60', '22', ''];
  return [...texts, ...(number % 3 === 0 ? reservoir : table)].join(';');
}

function comma(value: number): string {
  return String(Number(value.toPrecision(4))).replace('.', ',');
}
