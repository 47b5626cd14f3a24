/** Every figure that corners, counts, remedies and requirements rest on, each with its unit, its reason and what changing it does. */

// --- corners --------------------------------------------------------------------------------------------------------------------

/** Multiple of the 25 degree latching and holding currents at 0 degrees C, where a dimmer in an unheated house is switched on. Common in
 * triac data, from memory: about 1.6 at -40, 1.2 at 0, 0.75 at 60. Higher makes the cold corners stricter. */
export const COLD_FACTOR = 1.2;

// --- assumed values -------------------------------------------------------------------------------------------------------------

/** dial positions at which a changed value is first tried, so that the whole dial is swept only where that shows a change: a narrower
 * upset than a fifth of the dial can go unnoticed there */
export const TRIAL_POSITIONS = 6;
/** halvings of the way from the assumed value to where the grade has flipped: to 1/64 of it, finer than such a part can be measured */
export const SETTLING_HALVINGS = 6;
/** of these the first ones find out which of several values flips the grade nearest to what was assumed */
export const RANKING_HALVINGS = 3;
/** values, nearest first, for which a flip that a few positions show is confirmed at every corner, before none is said to settle it */
export const SURE_TRIES = 3;

// --- undecided pairings ---------------------------------------------------------------------------------------------------------

/** F, the smallest capacitor that is put across a lamp's input; with less it switches to and fro within microseconds where its curve falls.
 * Larger would give the hint where the capacitor is not to blame. */
export const LEAST_FILM_CAPACITOR = 1e-9;

// --- lamp counts ----------------------------------------------------------------------------------------------------------------

/** counts judged in one call: each takes up to four sweeps */
export const MOST_COUNTS = 60;
/** s: where the triac's current, had it stayed on, would have passed the holding current again within this time, the drop-out was a ring's
 * trough; lamp inputs and chokes ring at 2 kHz and more (generic parts, from memory), so a whole period is over by then */
export const RING_WINDOW = 0.5e-3;
/** half-cycles let pass and then looked at for the cause of a drop-out: a wandering pattern shows several causes, the most frequent counts */
export const CAUSE_SETTLING = 20;
export const CAUSE_HALF_CYCLES = 8;
/** samples of each visit to a mode in that search; a ring's crest is some tenths of a ring period wide */
export const CAUSE_SAMPLES = 60;

// --- remedies -------------------------------------------------------------------------------------------------------------------

/** W at full mains, the largest added resistor looked at: more heat than a wall box or ceiling space is rid of (our choice) */
export const MOST_ADDED_POWER = 25;
/** W, the smallest: less than a lamp's own tolerance */
export const LEAST_ADDED_POWER = 0.5;
/** a resistor is bought for this multiple of what it turns to heat: common practice where it sits without moving air */
export const POWER_MARGIN = 2;
/** W, power ratings that wire-wound and metal-film resistors are commonly sold in (from memory) */
export const POWER_RATINGS: readonly number[] = [0.25, 0.5, 1, 2, 3, 5, 7, 10, 15, 25, 50, 100];
/** V r.m.s., voltage classes of capacitors meant to be connected across the mains (class X2, from memory) */
export const CAPACITOR_CLASSES: readonly number[] = [150, 275, 310, 440, 480];
/** bypass values tried: F and Ohm. Below 47 nF it does not outweigh a lamp's own capacitor, above 470 nF it glows through every dimmer */
export const BYPASS_CAPACITANCES: readonly number[] = [47e-9, 100e-9, 150e-9, 220e-9, 330e-9, 470e-9];
export const BYPASS_RESISTANCES: readonly number[] = [100, 220, 470];
/** lamps that are added one by one */
export const MOST_ADDED_LAMPS = 2;

// --- requirement ----------------------------------------------------------------------------------------------------------------

/** IH/IL along which the boundary is sought, one point each, falling: dense where both currents bind, and down to what data sheets show */
export const REQUIREMENT_RATIOS: readonly number[] = [1, 0.9, 0.8, 0.7, 0.6, 0.5, 0.45, 0.4, 0.35, 0.3, 0.25, 0.2];
/** A, latching currents between which the boundary is sought: no triac for a wall dimmer latches below the one or above the other */
export const LEAST_LATCHING = 1e-3;
export const MOST_LATCHING = 1;
/** factor between the latching currents first tried on a ratio that no other gives a hint for */
export const LADDER_RATIO = 4;
/** step of that search where it comes down from a current that fails on the way down of the dial: currents that do over less than this
 * can be passed over */
export const DESCENT_RATIO = 1.08;
/** a point is found once the smallest current known to fail is within this factor of it: finer than such currents are ever stated */
export const REQUIREMENT_RATIO = 1.01;
/** share of a point's currents at which it is checked that smaller ones do as well */
export const PROBE_BELOW = 0.5;
