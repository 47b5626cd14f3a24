/**
 * Reads what the header of a scope record says of one column: which quantity it holds and in which unit. Names such as `time_s`,
 * `Time (ms)`, `u [V]`, `Current/mA` or a row of bare units are understood; anything else says nothing.
 */
export type Quantity = 'time' | 'voltage' | 'current';

/** how many of the unit make one s, V or A */
export const UNITS: { readonly [quantity in Quantity]: { readonly [unit: string]: number } } = {
  time: { s: 1, ms: 1e3, us: 1e6, ns: 1e9 },
  voltage: { V: 1, mV: 1e3, kV: 1e-3 },
  current: { A: 1, mA: 1e3, uA: 1e6 },
};

const NAMES: { readonly [quantity in Quantity]: readonly string[] } = {
  time: ['time', 't', 'seconds'],
  voltage: ['voltage', 'volts', 'volt', 'u', 'v', 'mains'],
  current: ['current', 'amps', 'amperes', 'i'],
};

export interface Heading {
  readonly quantity: Quantity | null;
  readonly unit: string | null;
}

/** the unit's usual spelling and its quantity; both letters of micro and a plain u are one */
function unitOf(text: string): { readonly quantity: Quantity; readonly unit: string } | null {
  const plain = text.trim().replace(/^[\u00b5\u03bc]/, 'u');
  for (const quantity of ['time', 'voltage', 'current'] as const) {
    const unit = Object.keys(UNITS[quantity]).find((known) => known === plain || (quantity === 'time' && known === plain.toLowerCase()));
    if (unit !== undefined) return { quantity, unit };
  }
  return null;
}

export function readHeading(text: string): Heading {
  const trimmed = text.trim();
  const bracketed = /^(.*?)[([{]\s*([^)\]}]*?)\s*[)\]}]\s*$/.exec(trimmed);
  const suffixed = /^(.*?)[\s_/,]+([^\s_/,]+)$/.exec(trimmed);
  for (const parts of [bracketed, suffixed]) {
    const unit = parts === null ? null : unitOf(parts[2] as string);
    if (unit !== null) return { quantity: quantityNamed((parts as RegExpExecArray)[1] as string) ?? unit.quantity, unit: unit.unit };
  }
  return unitOf(trimmed) ?? { quantity: quantityNamed(trimmed), unit: null };
}

function quantityNamed(text: string): Quantity | null {
  const words = text
    .toLowerCase()
    .split(/[^a-z]+/)
    .filter((word) => word !== '');
  for (const quantity of ['time', 'voltage', 'current'] as const) {
    if (words.some((word) => NAMES[quantity].includes(word))) return quantity;
  }
  return null;
}
