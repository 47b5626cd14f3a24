/** Every limit and tolerance of the profiles, each with its unit, its reason and what changing it does. */

// --- fitting --------------------------------------------------------------------------------------------------------------------

/** r.m.s. error over r.m.s. current above which a fitted lamp is refused: it would stand for another lamp than the recorded one */
export const RESIDUAL_LIMIT = 0.15;
/** points a phase table may hold */
export const FEWEST_POINTS = 8;
export const MOST_POINTS = 720;
/** places, evenly over the voltage, at which a fitted curve may bend before its bends are moved: 3.4 V apart at 230 V */
export const KNOT_PLACES = 96;
/** bends of a fitted curve; each is one more mode for the simulation, and few lamps need ten */
export const MOST_KNOTS = 24;
/** a further bend must lower n ln(squared error) by this many ln n (a stricter Bayesian information criterion, since the best of
 * KNOT_PLACES is picked); smaller follows the noise, larger cuts corners */
export const KNOT_PENALTY = 3;
/** share of r.m.s. current below which further bends are not looked for: a tenth of what a good current probe errs by */
export const GOOD_ENOUGH = 0.003;
/** while bends are still being added, one may lie this share above the largest recorded current; in the end none does */
export const KNOT_OVERSHOOT = 0.5;
/** F, below which an input capacitor is taken as none */
export const LEAST_CAPACITANCE = 10e-12;
/** significant digits of fitted values: well below their uncertainty, and the same on every machine */
export const FITTED_DIGITS = 5;
/** share of its peak at which the current besides the capacitor's counts as conduction, when the arc is looked for */
export const ARC_SHARE = 0.1;
/** points of a half-cycle that must carry current, or its shape was not recorded: a reservoir's arc has three unknowns */
export const FEWEST_ARC_POINTS = 3;
/** sine of the angle to the zero crossing up to which only an input capacitor's current is expected of a reservoir lamp (17 degrees) */
export const NEAR_ZERO_CROSSING = 0.3;
/** degrees after the zero crossing by which a reservoir's arc has ended (50 Ohm and 2 uF/W end near 110), and before which it cannot begin */
export const ARC_END = 125;
export const ARC_BEGIN = 10;
/** an arc's part past the crest over its part before it: 1 for a curve of the voltage, about 0.1 to 0.6 for a reservoir */
export const ARC_LEAN = 0.8;
/** steps per half-cycle of the quick solution of a reservoir lamp, which only guides the search: 0.25 degrees */
export const CYCLE_STEPS = 720;
/** half-cycles that the quick solution may take to repeat, and the share of the peak voltage within which it has repeated */
export const CYCLE_BUDGET = 200;
export const CYCLE_REPEATS = 1e-7;
/** half-cycles that an undimmed lamp may take to repeat in the engine; a reservoir of 2 uF/W takes about forty */
export const UNDIMMED_BUDGET = 600;
/** Ohm, everything between the stiff sine and the lamp where a lamp runs undimmed: 1 mV at 1 A */
export const UNDIMMED_RESISTANCE = 1e-3;
/** A, beyond every current: the switch that stands for the dimmer is held by its gate and never gets to latch or to let go by itself */
export const UNDIMMED_LATCHING = 1e6;
/** a fitted reservoir's drain must stop below this share of the lowest voltage it was seen at, or the record would contradict it */
export const LEAST_TROUGH_SHARE = 0.8;

// --- classes --------------------------------------------------------------------------------------------------------------------

/** relative: undimmed power of a class's circuit against the rated power */
export const CLASS_POWER_TOLERANCE = 0.01;
/** how far a circuit's undimmed power factor may lie below and above the stated one: makers round to a tenth or a twentieth, and
 * state what a lamp at least has (0.9 is said of lamps that have 0.98) */
export const POWER_FACTOR_BELOW = 0.05;
export const POWER_FACTOR_ABOVE = 0.1;
/** places along a class's range at which the power factor is computed, when one is stated */
export const RANGE_PLACES = 9;

/** rounds in which a circuit is scaled to the rated power; each cuts the error to about a tenth */
export const SCALE_ROUNDS = 12;
/** V r.m.s.; generic values are for 220-240 V supplies from here up, and for 100-127 V supplies below */
export const HIGH_SUPPLY_FROM = 180;

// --- scope records --------------------------------------------------------------------------------------------------------------

/** a phase table from fewer samples a period would not show a reservoir lamp's arc of 30 degrees (three samples) */
export const FEWEST_SAMPLES_A_PERIOD = 40;
/** Hz and V r.m.s.: what mains can be, the ranges of the phase table's own fields */
export const FREQUENCY_RANGE: readonly [number, number] = [45, 65];
export const VOLTAGE_RANGE: readonly [number, number] = [85, 265];
/** Hz, up to which the fundamental is looked for (from one period in the record up): wide, so that a record outside FREQUENCY_RANGE is
 * named as such */
export const HIGHEST_SEARCHED = 500;
/** samples that the coarse search for the fundamental looks at: its work grows with their square */
export const COARSE_SAMPLES = 4000;
/** steps by which a sample may lie off the even grid: a printed time is rounded by up to half a step; a missing sample is a whole one */
export const TIME_JITTER = 0.6;
/** r.m.s. share of what is not the fundamental in the averaged voltage: public mains stay within 8 % (EN 50160, total harmonic
 * distortion), a phase-cut voltage exceeds 20 % from about 40 degrees on */
export const DISTORTION_LIMIT = 0.1;
/** a column whose averaged shape is nearer to a sine than this could be a voltage */
export const SINE_LIKE = 0.08;
/** a run at the extreme value must be this many times longer than quantisation alone would make a sine's crest, plus so many samples */
export const CLIP_FACTOR = 2.5;
export const CLIP_SAMPLES = 4;
/** share of a period within which a clipped wave has left its flat top by so many steps of the scope's resolution, on either side */
export const CLIP_EDGE = 0.02;
export const CLIP_EDGE_STEPS = 3;
/** a column carries noise if its samples typically differ by this many steps of its resolution: a flat top would then differ too */
export const CLIP_NOISE_STEPS = 1.5;
/** degrees by which the middle of a flat top must miss the crest where nothing else tells clipping from a regulated current */
export const CLIP_OFF_CREST = 6;
/** a factor of 1000 mistaken between A and mA leaves the power within this many times 1000 of the rated one */
export const UNIT_SPREAD = 3;
/** W: a power outside of this is no lamp's, where no rated power is stated */
export const LAMP_POWER: readonly [number, number] = [0.05, 2000];
/** a recorded power this many times above or below the rated one is another lamp, or another probe factor */
export const POWER_SPREAD = 2;
/** points of the averaged phase table, at most: one a degree */
export const AVERAGED_POINTS = 360;
