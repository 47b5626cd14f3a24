/** Turns dial rows into reasons: what happens, over which part of the dial, in plain words. */
import type { DialRow, DialState, PopOn, Reason, ReasonCode } from '../verdict.ts';
import { byPosition } from './steady-range.ts';

const percent = (value: number): string => `${Number((100 * value).toPrecision(2))} %`;

/** "once", "2 times", "2 to 5 times" */
export function times(min: number, max: number): string {
  const low = Math.floor(min);
  const high = Math.ceil(max);
  if (low === high) return low === 1 ? 'once' : `${low} times`;
  return `${low} to ${high} times`;
}

interface Finding {
  readonly state: DialState;
  readonly code: ReasonCode;
  readonly tell: (rows: readonly DialRow[]) => string;
}

const least = (rows: readonly DialRow[], pick: (r: DialRow) => number): number => Math.min(...rows.map(pick));
const most = (rows: readonly DialRow[], pick: (r: DialRow) => number): number => Math.max(...rows.map(pick));

const FINDINGS: readonly Finding[] = [
  {
    state: 'undecided',
    code: 'undecided',
    tell: () => 'Too much switching to follow within the event budget: no answer is given rather than a wrong one.',
  },
  {
    state: 'skipping',
    code: 'skips-half-cycles',
    tell: (rows) => {
      const low = percent(least(rows, (r) => r.silentShare));
      const high = percent(most(rows, (r) => r.silentShare));
      return `Some half-cycles fire and others do not (${low === high ? low : `${low} to ${high}`} stay silent): visible flicker.`;
    },
  },
  {
    state: 're-firing',
    code: 're-fires',
    tell: (rows) => {
      // of the busiest half-cycle of each row
      const [low, high] = [least(rows, (r) => r.firings.max), most(rows, (r) => r.firings.max)];
      const count = low === high ? `up to ${times(low, high)}` : times(low, high);
      const wanders = rows.some((r) => r.repeatsAfter === null || r.repeatsAfter > 2);
      return `The triac drops out and fires again, ${count} in a half-cycle: hum and heat${wanders ? ', and flicker because the pattern changes' : ''}.`;
    },
  },
  {
    state: 'dropping-out',
    code: 'drops-out',
    tell: (rows) =>
      `The lamps' current falls below the holding current while they would still draw: conduction ends after ${Math.round(least(rows, (r) => r.conductionAngle ?? 0))} degrees at the least, and that light is lost.`,
  },
  {
    state: 'lopsided',
    code: 'lopsided',
    tell: (rows) =>
      `The two polarities deliver energy that differs by a modulation of up to ${percent(most(rows, (r) => r.polarityDifference))}: flicker at the mains frequency.`,
  },
  {
    state: 'wandering',
    code: 'wanders',
    tell: (rows) => `The energy of like half-cycles varies by a modulation of up to ${percent(most(rows, (r) => r.variation))}: flicker.`,
  },
];

/** unbroken runs of positions at which some row shows the state */
function ranges(dial: readonly DialRow[], shows: (row: DialRow) => boolean): { from: number; to: number; rows: DialRow[] }[] {
  const found: { from: number; to: number; rows: DialRow[] }[] = [];
  let open: { from: number; to: number; rows: DialRow[] } | null = null;
  for (const { position, rows } of byPosition(dial)) {
    const hit = rows.filter(shows);
    if (hit.length === 0) {
      open = null;
      continue;
    }
    if (open === null) {
      open = { from: position, to: position, rows: [] };
      found.push(open);
    }
    open.to = position;
    open.rows.push(...hit);
  }
  return found;
}

export function dialReasons(dial: readonly DialRow[], pop: PopOn): Reason[] {
  const reasons: Reason[] = [];
  const tell = (code: ReasonCode, shows: (row: DialRow) => boolean, detail: (rows: readonly DialRow[]) => string): void => {
    for (const r of ranges(dial, shows)) reasons.push({ code, dial: [r.from, r.to], detail: detail(r.rows) });
  };
  for (const f of FINDINGS) tell(f.code, (row) => row.state === f.state || row.alsoStates.includes(f.state), f.tell);
  tell(
    'failed-latch',
    (row) => row.failedLatches > 0,
    () => 'The gate pulse ends before the current reaches the latching current: that firing is lost.',
  );
  tell(
    'stuck-diac',
    (row) => row.diacStuck,
    () => 'The timing resistor feeds the diac more than its holding current, so it does not switch off after firing.',
  );
  const positions = dial.map((r) => r.position);
  if (dial.length > 0 && dial.every((r) => r.state === 'dark')) {
    reasons.push({
      code: 'never-lights',
      dial: [Math.min(...positions), Math.max(...positions)],
      detail: 'No half-cycle fires at any dial position: the lamps stay dark.',
    });
  } else if (pop.litFrom !== null) {
    const lowest = Math.min(...positions);
    const outBelow = pop.outBelow ?? pop.litFrom;
    if (pop.litFrom > lowest && outBelow > lowest) {
      const highestDark = Math.max(...positions.filter((p) => p < outBelow));
      reasons.push({ code: 'dark-low-on-dial', dial: [lowest, highestDark], detail: 'The lamps are dark at the lower end of the dial.' });
    }
    if (pop.outBelow !== null && pop.litFrom > pop.outBelow) {
      reasons.push({
        code: 'pop-on',
        dial: [pop.outBelow, pop.litFrom],
        detail: `On the way up the lamps light only at ${pop.litFrom} %; on the way down they stay lit to ${pop.outBelow} %.`,
      });
    }
  }
  return reasons;
}
