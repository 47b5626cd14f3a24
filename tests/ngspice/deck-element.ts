/** Netlist lines of single elements, shared by the dimmer's and the lamps' part of the deck. */

export function number(value: number): string {
  if (!Number.isFinite(value)) throw new RangeError(`not a number for a netlist: ${value}`);
  return String(Number(value.toPrecision(12)));
}

/** No resistance is a source of 0 V: ngspice would otherwise put 1 mOhm there. */
export function resistorOrShort(name: string, from: string, to: string, resistance: number): string {
  return resistance > 0 ? `r${name} ${from} ${to} ${number(resistance)}` : `vshort${name} ${from} ${to} 0`;
}

/** Inductance with its loss resistance in parallel; no inductance is a short, whatever the loss. */
export function inductorOrShort(name: string, from: string, to: string, inductance: number, loss: number | null): string[] {
  if (inductance === 0) return [`vshort${name} ${from} ${to} 0`];
  const inductor = `l${name} ${from} ${to} ${number(inductance)}`;
  return loss === null ? [inductor] : [inductor, `rloss${name} ${from} ${to} ${number(loss)}`];
}

export function seriesRC(name: string, from: string, to: string, resistance: number, capacitance: number): string[] {
  return [resistorOrShort(name, from, `mid${name}`, resistance), `c${name} mid${name} ${to} ${number(capacitance)}`];
}

/** A piecewise-linear function of an expression; `points` rise in their first member and reach beyond every voltage or current of a run. */
export function piecewise(expression: string, points: readonly (readonly [number, number])[]): string {
  return `pwl(${expression}, ${points.map(([x, y]) => `${number(x)}, ${number(y)}`).join(', ')})`;
}

/** An odd piecewise-linear function from its points at rising positive x, beginning with the first x > 0 at which it bends. */
export function oddPiecewise(expression: string, positive: readonly (readonly [number, number])[]): string {
  const negative = positive.map(([x, y]) => [-x, -y] as const).reverse();
  return piecewise(expression, [...negative, ...positive]);
}

/** A one-bit detector: 1 where `expression` (a function that goes from 0 to 1 over a narrow band) says so, low-passed so that the
 * truncation error makes ngspice shorten its step around every change, and handed to the event-driven logic as `name`. */
export function detector(name: string, expression: string): string[] {
  return [
    `b${name} 0 ${name}x i=${expression}`,
    `r${name} ${name}x 0 1`,
    `c${name} ${name}x 0 ${detectorTime}`,
    `a${name} [${name}x] [${name}] todigital`,
  ];
}

/** time constant of a detector (with its 1 Ohm), s */
const detectorTime = '10n';

/** Function of x that is 1 beyond either limit (`negative` is a magnitude) and 0 between, bending over +-band. */
export function beyond(expression: string, positive: number, negative: number, band: number): string {
  return piecewise(expression, [
    [-1e6, 1],
    [-negative - band, 1],
    [-negative + band, 0],
    [positive - band, 0],
    [positive + band, 1],
    [1e6, 1],
  ]);
}

/** The opposite of `beyond`. */
export function within(expression: string, positive: number, negative: number, band: number): string {
  return piecewise(expression, [
    [-1e6, 0],
    [-negative - band, 0],
    [-negative + band, 1],
    [positive - band, 1],
    [positive + band, 0],
    [1e6, 0],
  ]);
}
