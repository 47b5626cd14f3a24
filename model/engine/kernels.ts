/**
 * The arithmetic of a mode's shape, written out in full. A mode with so many decaying coordinates and rotating pairs (the mains' is the
 * last) takes the same few sums at every step; as loops over them most of the time goes into the loops. Here each sum is generated once
 * per shape as straight-line code that keeps the coordinates in registers. Only a shape's two counts ever reach the generated text.
 *
 * Layouts, as in LinearMode: coordinates are the reals, then re and im of each pair; factors likewise; terms are the reals, then the
 * pairs; an output's row has its share of each real, then for each pair its shares of re and im and the size of the two together.
 */

/** A guard that is watched is a record of WATCHED_STRIDE numbers: its output before and after the step; its window; its output's constant
 * part; and how far the output can stray from the chord, over h^2 for the slow terms and altogether for the fast ones. */
export const WATCHED_STRIDE = 9;
export const BEFORE = 0;
export const AFTER = 1;
export const LOWER = 2;
export const UPPER = 3;
export const SLACK = 4;
export const REST = 5;
export const BEND = 6;
export const RANGE = 7;
export const SPARE = 8;

/** A guard's window is a record of WINDOW_STRIDE numbers, and its output's row stands beside it. */
export const WINDOW_STRIDE = 4;
export const WINDOW_LOWER = 0;
export const WINDOW_UPPER = 1;
export const WINDOW_SLACK = 2;
export const WINDOW_REST = 3;

type Numbers = Float64Array;

export interface Kernels {
  /** the output with this row at z (less its constant part), into at[0] */
  readonly value: (at: Numbers, z: Numbers, outputRows: Numbers, row: number) => void;
  /** zNext = z moved by the factors from `f` on; the watched outputs there, into AFTER */
  readonly step: (
    z: Numbers,
    zNext: Numbers,
    factors: Numbers,
    f: number,
    outputRows: Numbers,
    watched: Numbers,
    rows: Int32Array,
    count: number,
  ) => void;
  /** BEND and RANGE of every watched guard at z, by the level's strays from `b` on */
  readonly bound: (z: Numbers, strays: Numbers, b: number, outputRows: Numbers, watched: Numbers, rows: Int32Array, count: number) => void;
  /** Puts every guard that could ever leave its window on the watch (with `all`, every one). Returns how many there are, or ~g for the
   * first guard g that is outside its window by more than its slack, and then in side[0] whether below (0) or above (1). */
  readonly begin: (
    z: Numbers,
    strays: Numbers,
    b: number,
    outputRows: Numbers,
    windows: Numbers,
    windowRows: Int32Array,
    guardCount: number,
    all: boolean,
    watched: Numbers,
    rows: Int32Array,
    guards: Int32Array,
    side: Numbers,
    spares: Numbers,
  ) => number;
  /** whether a walk that begins at z stays so near the one that began at walks[from..] that what that one had to spare, walks[spares..] per
   * guard, is enough */
  readonly near: (
    z: Numbers,
    walks: Numbers,
    from: number,
    spares: number,
    outputRows: Numbers,
    windowRows: Int32Array,
    guardCount: number,
  ) => boolean;
  /** value (less its constant part) and slope of the output taken apart, at factors kept from `f` on, into at[0] and at[1]; the factors into
   * `moved` */
  readonly recall: (at: Numbers, moved: Numbers, parts: Numbers, factors: Numbers, f: number) => void;
  /** Takes an output apart at z: what multiplies each factor in its value, its slope and its curvature, into `parts`; slope and curvature
   * at z into at[0] and at[1]. */
  readonly takeApart: (
    parts: Numbers,
    at: Numbers,
    z: Numbers,
    decay: Numbers,
    rotation: Numbers,
    outputRows: Numbers,
    row: number,
  ) => void;
  /** slope and curvature of the output taken apart, at the factors from `f` on, into at[0] and at[1] */
  readonly bendAfter: (at: Numbers, parts: Numbers, factors: Numbers, f: number) => void;
  /** value (less its constant part) and slope of the output taken apart after a time, into at[0] and at[1]; the factors into `moved` */
  readonly probe: (at: Numbers, moved: Numbers, parts: Numbers, decay: Numbers, rotation: Numbers, time: number) => void;
  /** the same a very short time after, or before, the time that `moved` belongs to */
  readonly nudge: (at: Numbers, moved: Numbers, parts: Numbers, decay: Numbers, rotation: Numbers, by: number) => void;
  /** value (less its constant part) of the output taken apart, after a time */
  readonly valueAfter: (parts: Numbers, decay: Numbers, rotation: Numbers, time: number) => number;
  /** into = from moved by factors from `f` on */
  readonly move: (into: Numbers, from: Numbers, factors: Numbers, f: number) => void;
  /** factors of any time */
  readonly factorsAfter: (moved: Numbers, decay: Numbers, rotation: Numbers, time: number) => void;
  /** into = matrix * (z, 1), the mains' pair as it is, and the same into `start` */
  readonly pass: (z: Numbers, into: Numbers, start: Numbers, matrix: Numbers) => void;
}

/** of the mains' angle: below it the first terms of sine and cosine are exact to rounding. Nearly every visit is that short */
const SMALL_ANGLE = 0.02;

/** a sum as a balanced tree: its parts do not wait for one another */
function sum(parts: readonly string[]): string {
  if (parts.length === 0) return '0';
  if (parts.length === 1) return parts[0] as string;
  const half = parts.length >> 1;
  return `(${sum(parts.slice(0, half))} + ${sum(parts.slice(half))})`;
}

function writtenOut(reals: number, pairs: number): string {
  const real = Array.from({ length: reals }, (_, k) => k);
  const pair = Array.from({ length: pairs }, (_, p) => ({
    p,
    term: reals + p,
    re: reals + 2 * p,
    im: reals + 2 * p + 1,
    row: reals + 3 * p,
  }));
  const coordinates = reals + 2 * pairs;
  const each = <T>(items: readonly T[], text: (item: T) => string): string => items.map(text).join('\n');
  const total = (ofReal: (k: number) => string, ofPair: (at: (typeof pair)[number]) => string): string =>
    sum([...real.map(ofReal), ...pair.map(ofPair)]);
  /** 'of' moved by the factors named `by`, as `u0`, `u1`, ... */
  const moved = (of: string, by: (k: number) => string): string =>
    each(real, (k) => `const u${k} = ${of}[${k}] * ${by(k)};`) +
    each(
      pair,
      ({ re, im }) => `
      const u${re} = ${by(re)} * ${of}[${re}] - ${by(im)} * ${of}[${im}];
      const u${im} = ${by(re)} * ${of}[${im}] + ${by(im)} * ${of}[${re}];`,
    );
  const stored = (into: string): string => Array.from({ length: coordinates }, (_, k) => `${into}[${k}] = u${k};`).join(' ');
  const sizes =
    each(real, (k) => `const s${k} = Math.abs(z[${k}]);`) +
    each(pair, ({ term, re, im }) => `const s${term} = Math.sqrt(z[${re}] * z[${re}] + z[${im}] * z[${im}]);`);
  const curvatures = each(
    [...real, ...pair.map(({ term }) => term)],
    (t) => `const x${t} = strays[b + ${t}], b${t} = Math.max(x${t}, 0), r${t} = Math.max(-x${t}, 0);`,
  );
  const shares =
    each(real, (k) => `const h${k} = Math.abs(outputRows[row + ${k}]) * s${k};`) +
    each(pair, ({ term, row }) => `const h${term} = outputRows[row + ${row + 2}] * s${term};`);
  const terms = [...real, ...pair.map(({ term }) => term)];
  const factors = (into: string): string =>
    each(real, (k) => `${into}[${k}] = Math.exp(decay[${k}] * time);`) +
    each(pair, ({ p, term, re, im }) =>
      p === pairs - 1
        ? `{
      const angle = rotation[${term}] * time;
      if (angle < ${SMALL_ANGLE}) {
        const square = angle * angle;
        ${into}[${re}] = 1 - square * (1 / 2 - square * (1 / 24 - square / 720));
        ${into}[${im}] = angle * (1 - square * (1 / 6 - square * (1 / 120 - square / 5040)));
      } else {
        ${into}[${re}] = Math.cos(angle);
        ${into}[${im}] = Math.sin(angle);
      }
    }`
        : `{
      const angle = rotation[${term}] * time;
      const size = Math.exp(decay[${term}] * time);
      ${into}[${re}] = size * Math.cos(angle);
      ${into}[${im}] = size * Math.sin(angle);
    }`,
    );
  // parts: value, slope and curvature, each with one number a coordinate
  const slopeFrom = coordinates;
  const bendFrom = 2 * coordinates;
  const weighed = (from: number, by: (k: number) => string): string =>
    total(
      (k) => `parts[${from + k}] * ${by(k)}`,
      ({ re, im }) => `(parts[${from + re}] * ${by(re)} + parts[${from + im}] * ${by(im)})`,
    );
  const states = reals + 2 * (pairs - 1);
  const width = states + 3;
  return `'use strict';
return {
  value(at, z, outputRows, row) {
    at[0] = ${total(
      (k) => `outputRows[row + ${k}] * z[${k}]`,
      ({ row, re, im }) => `(outputRows[row + ${row}] * z[${re}] + outputRows[row + ${row + 1}] * z[${im}])`,
    )};
  },
  step(z, zNext, factors, f, outputRows, watched, rows, count) {
    ${moved('z', (k) => `factors[f + ${k}]`)}
    ${stored('zNext')}
    for (let w = 0, at = 0; w < count; w++, at += ${WATCHED_STRIDE}) {
      const row = rows[w];
      watched[at + ${AFTER}] = watched[at + ${REST}] + ${total(
        (k) => `outputRows[row + ${k}] * u${k}`,
        ({ row, re, im }) => `(outputRows[row + ${row}] * u${re} + outputRows[row + ${row + 1}] * u${im})`,
      )};
    }
  },
  bound(z, strays, b, outputRows, watched, rows, count) {
    ${sizes}
    ${curvatures}
    for (let w = 0, at = 0; w < count; w++, at += ${WATCHED_STRIDE}) {
      const row = rows[w];
      ${shares}
      watched[at + ${BEND}] = ${sum(terms.map((t) => `h${t} * b${t}`))};
      watched[at + ${RANGE}] = ${sum(terms.map((t) => `h${t} * r${t}`))};
    }
  },
  begin(z, strays, b, outputRows, windows, windowRows, guardCount, all, watched, rows, guards, side, spares) {
    ${Array.from({ length: coordinates }, (_, k) => `const z${k} = z[${k}];`).join(' ')}
    ${sizes}
    ${curvatures}
    let count = 0;
    for (let guard = 0, from = 0, at = 0; guard < guardCount; guard++, from += ${WINDOW_STRIDE}) {
      const row = windowRows[guard];
      const lower = windows[from + ${WINDOW_LOWER}];
      const upper = windows[from + ${WINDOW_UPPER}];
      const slack = windows[from + ${WINDOW_SLACK}];
      const rest = windows[from + ${WINDOW_REST}];
      const y = rest + ${total(
        (k) => `outputRows[row + ${k}] * z${k}`,
        ({ row, re, im }) => `(outputRows[row + ${row}] * z${re} + outputRows[row + ${row + 1}] * z${im})`,
      )};
      if (y < lower - slack || y > upper + slack) {
        side[0] = y < lower ? 0 : 1;
        return ~guard;
      }
      ${shares}
      const reach = ${sum(terms.map((t) => `h${t}`))};
      const spare = Math.min(rest - reach - lower, upper - rest - reach);
      if (!all && spare > 0) {
        spares[guard] = spare;
        continue;
      }
      spares[guard] = Infinity;
      rows[count] = row;
      guards[count++] = guard;
      watched[at + ${BEFORE}] = y;
      watched[at + ${LOWER}] = lower;
      watched[at + ${UPPER}] = upper;
      watched[at + ${SLACK}] = slack;
      watched[at + ${REST}] = rest;
      watched[at + ${BEND}] = ${sum(terms.map((t) => `h${t} * b${t}`))};
      watched[at + ${RANGE}] = ${sum(terms.map((t) => `h${t} * r${t}`))};
      at += ${WATCHED_STRIDE};
    }
    return count;
  },
  near(z, walks, from, spares, outputRows, windowRows, guardCount) {
    ${each(real, (k) => `const s${k} = Math.abs(z[${k}] - walks[from + ${k}]);`)}
    ${each(
      pair,
      ({ term, re, im }) => `const x${re} = z[${re}] - walks[from + ${re}], x${im} = z[${im}] - walks[from + ${im}];
      const s${term} = Math.sqrt(x${re} * x${re} + x${im} * x${im});`,
    )}
    for (let g = 0; g < guardCount; g++) {
      const row = windowRows[g];
      ${shares}
      if (!(${sum(terms.map((t) => `h${t}`))} <= walks[spares + g])) return false;
    }
    return true;
  },
  recall(at, moved, parts, factors, f) {
    ${Array.from({ length: coordinates }, (_, k) => `const m${k} = factors[f + ${k}]; moved[${k}] = m${k};`).join(' ')}
    at[0] = ${weighed(0, (k) => `m${k}`)};
    at[1] = ${weighed(slopeFrom, (k) => `m${k}`)};
  },
  takeApart(parts, at, z, decay, rotation, outputRows, row) {
    ${each(
      real,
      (k) => `
      const v${k} = outputRows[row + ${k}] * z[${k}], d${k} = decay[${k}], g${k} = v${k} * d${k}, c${k} = g${k} * d${k};
      parts[${k}] = v${k}; parts[${slopeFrom + k}] = g${k}; parts[${bendFrom + k}] = c${k};`,
    )}
    ${each(
      pair,
      ({ term, row, re, im }) => `
      const v${re} = outputRows[row + ${row}] * z[${re}] + outputRows[row + ${row + 1}] * z[${im}];
      const v${im} = outputRows[row + ${row + 1}] * z[${re}] - outputRows[row + ${row}] * z[${im}];
      const d${re} = decay[${term}], q${re} = rotation[${term}];
      const g${re} = d${re} * v${re} + q${re} * v${im}, g${im} = d${re} * v${im} - q${re} * v${re};
      const c${re} = d${re} * g${re} + q${re} * g${im}, c${im} = d${re} * g${im} - q${re} * g${re};
      parts[${re}] = v${re}; parts[${slopeFrom + re}] = g${re}; parts[${bendFrom + re}] = c${re};
      parts[${im}] = v${im}; parts[${slopeFrom + im}] = g${im}; parts[${bendFrom + im}] = c${im};`,
    )}
    at[0] = ${total(
      (k) => `g${k}`,
      ({ re }) => `g${re}`,
    )};
    at[1] = ${total(
      (k) => `c${k}`,
      ({ re }) => `c${re}`,
    )};
  },
  bendAfter(at, parts, factors, f) {
    at[0] = ${weighed(slopeFrom, (k) => `factors[f + ${k}]`)};
    at[1] = ${weighed(bendFrom, (k) => `factors[f + ${k}]`)};
  },
  probe(at, moved, parts, decay, rotation, time) {
    ${factors('moved')}
    at[0] = ${weighed(0, (k) => `moved[${k}]`)};
    at[1] = ${weighed(slopeFrom, (k) => `moved[${k}]`)};
  },
  nudge(at, moved, parts, decay, rotation, by) {
    ${each(
      real,
      (k) => `{
      const x = decay[${k}] * by;
      moved[${k}] *= 1 + x * (1 + x * (1 / 2 + x * (1 / 6 + x / 24)));
    }`,
    )}
    ${each(
      pair,
      ({ term, re, im }) => `{
      const x = decay[${term}] * by, y = rotation[${term}] * by, square = y * y;
      const size = 1 + x * (1 + x * (1 / 2 + x * (1 / 6 + x / 24)));
      const cos = size * (1 - square * (1 / 2 - square / 24)), sin = size * y * (1 - square * (1 / 6 - square / 120));
      const a = moved[${re}], b = moved[${im}];
      moved[${re}] = cos * a - sin * b;
      moved[${im}] = cos * b + sin * a;
    }`,
    )}
    at[0] = ${weighed(0, (k) => `moved[${k}]`)};
    at[1] = ${weighed(slopeFrom, (k) => `moved[${k}]`)};
  },
  valueAfter(parts, decay, rotation, time) {
    ${each(pair, ({ p, term }) => `const a${term} = rotation[${term}] * time${p === pairs - 1 ? '' : `, e${term} = Math.exp(decay[${term}] * time)`};`)}
    return ${total(
      (k) => `parts[${k}] * Math.exp(decay[${k}] * time)`,
      ({ p, term, re, im }) =>
        `(${p === pairs - 1 ? '' : `e${term} * `}(parts[${re}] * Math.cos(a${term}) + parts[${im}] * Math.sin(a${term})))`,
    )};
  },
  move(into, from, factors, f) {
    ${moved('from', (k) => `factors[f + ${k}]`)}
    ${stored('into')}
  },
  factorsAfter(moved, decay, rotation, time) {
    ${factors('moved')}
  },
  pass(z, into, start, matrix) {
    ${Array.from({ length: coordinates }, (_, k) => `const z${k} = z[${k}];`).join(' ')}
    ${Array.from({ length: states }, (_, r) => {
      const share = (c: number): string => (c === width - 1 ? `matrix[${r * width + c}]` : `matrix[${r * width + c}] * z${c}`);
      return `const u${r} = ${sum(Array.from({ length: width }, (_, c) => share(c)))}; into[${r}] = u${r}; start[${r}] = u${r};`;
    }).join('\n')}
    into[${states}] = z${states}; into[${states + 1}] = z${states + 1};
    start[${states}] = z${states}; start[${states + 1}] = z${states + 1};
  },
};`;
}

const known = new Map<number, Kernels>();

/** the kernels of modes with so many reals and pairs, the mains' pair among them */
export function kernelsFor(reals: number, pairs: number): Kernels {
  const shape = reals * 256 + pairs;
  let made = known.get(shape);
  if (made === undefined) {
    made = new Function(writtenOut(reals, pairs))() as Kernels;
    known.set(shape, made);
  }
  return made;
}
