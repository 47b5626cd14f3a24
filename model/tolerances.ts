/**
 * Every tolerance, cap, threshold and fixed circuit constant of the model, each with its unit, its reason and what changing it does.
 */

// --- fixed parts of the circuit -------------------------------------------------------------------------------------------------

/** Ohm, from the lamp line to neutral: the lamp line has no direct-current path while every bridge blocks and the triac is off.
 * 1 GOhm takes 0.3 uA; at 1 MOhm it would fire the diac of an unloaded dimmer. */
export const LINE_LEAKAGE = 1e9;
/** Ohm, across a reservoir capacitor: keeps a constant-current drain from being a pure integrator. Discharges 10 uF in three hours. */
export const RESERVOIR_LEAKAGE = 1e9;
/** Ohm, the least that a resistance counts as: with none at all two capacitors could be tied together. A contact has more. */
export const LEAST_RESISTANCE = 1e-3;
/** Ohm, stands for an absent ("null") inductor loss where two inductors would meet with nothing else at the node. Larger only stiffens. */
export const ABSENT_LOSS = 1e6;
/** Ohm, across a capacitor in series with a lamp: its discharge resistor (470 kOhm to 1 MOhm, from memory). Without one the charge left
 * on it would never go, and a bridge that blocks both ways would make it a pure integrator */
export const DROPPER_DISCHARGE = 1e6;
/** V, both diodes of a bridge together (common practice, 0.7 V each) */
export const BRIDGE_DROP = 1.4;
/** F, at the input of a lamp whose curve falls and that has no input capacitor: a falling curve without any capacitance has several
 * operating points at once. 100 pF is the wiring inside a lamp (from memory); it only decides which one is taken, within nanoseconds. */
export const STRAY_CAPACITANCE = 100e-12;
/** share of the minimum voltage over which a reservoir's drain fades out; a hard edge would chatter there */
export const DRAIN_FADE = 0.1;
/** ratio of neighbouring breakpoints of a constant-power drain's chords; 1.06 keeps each chord within 0.09 % of P/v (half of that after
 * centring), which moves a firing angle by less than 0.02 degrees even in a pattern of three half-cycles; 1.12 moved it by 0.07 */
export const DRAIN_RATIO = 1.06;
/** a constant-power drain is tabulated up to this multiple of the mains peak; a ring charges a reservoir to at most about twice */
export const DRAIN_SPAN = 2.5;
/** V, span over which an active bleeder starts, and over which it lets go */
export const BLEEDER_START = 5;
export const BLEEDER_RELEASE = 2;
/** V, span over which a curve whose first point is at 0 V with a current rises to it, inside the bridge's drop */
export const CURVE_START = 1;

// --- event location -------------------------------------------------------------------------------------------------------------

/** the shortest step is the half-cycle over 2^LADDER_LEVELS (76 ns at 50 Hz): a double crossing inside one such step cannot matter,
 * since nothing in the circuit's logic is faster */
export const LADDER_LEVELS = 17;
/** a half-cycle with more events than this is undecided; the busiest honest ones seen hold a few hundred */
export const EVENT_BUDGET = 4_000;
/** a half-cycle with more trial steps than this is undecided (the shortest step everywhere would be 131,072) */
export const STEP_BUDGET = 200_000;
/** switchings at one instant before the circuit is given up as inconsistent (a 64-point curve can be walked end to end) */
export const INSTANT_BUDGET = 400;
/** s, bracket at which an event counts as located all the same; 0.1 us is required, rounding of a 10 ms time is 1e-18 s */
export const EVENT_TIME = 1e-12;
/** events in a row without time passing before one shortest step is taken whatever the guards say (a graze at rounding level) */
export const STANDSTILL = 20;
/** share of the half-cycle after which a conducting diac counts as stuck; a dump takes some tens of microseconds */
export const DIAC_STUCK_SHARE = 0.25;
/** an event is located once its guard is within this share of its slack of its bound: 3e-8 V or A at 230 V, some 1e-11 s */
export const ROOT_SHARE = 0.1;
/** relative: a guard nearer its bound than this times the quantity's scale counts as on the bound, and its slope decides */
export const GUARD_SLACK = 1e-9;

/** walks and half-cycles that are remembered: eight half-cycles of each polarity (LONGEST_PERIOD), of some thirty walks each */
export const REMEMBERED_WALKS = 512;
export const REMEMBERED_PATHS = 16;
/** half-cycles that may pass without half of one being walked again, before remembering rests for twice, four times, ... as long: more than it
 * takes to see a pattern of LONGEST_PERIOD twice */
export const REMEMBERED_IN_VAIN = 24;
/** share of ROOT_SHARE within which a remembered crossing is taken where it was; elsewhere at least one step of Newton's makes it as exact as one
 * that is located from nothing, for a falling lamp curve multiplies what is left */
export const AS_KNOWN_SHARE = 1e-4;

// --- decomposition --------------------------------------------------------------------------------------------------------------

/** condition of the eigenvector matrix above which the system matrix is nudged apart (see DEFECT_NUDGES); rounding errors reach about
 * 2e-16 times this */
export const MODE_CONDITION = 1e8;
/** Newton's iterations on an eigenvalue at another timing resistance (three to five are usual), and the share of its distance to the nearest known
 * one within which it is found */
export const PORT_TRIES = 12;
export const PORT_FOUND = 1e-13;
/** share of the largest part in the port below which another is rounding */
export const PORT_UNREACHED = 1e-13;
/** a basis that was carried over to another timing resistance is kept where inverse times basis is 1 to this, and matrix times basis is basis times
 * eigenvalues to this share of the matrix's largest entry (a decomposition does some 1e-15 of either); else the matrix is decomposed. The first is
 * by how much a state may jump from mode to mode */
export const PORT_IDENTITY = 1e-12;
export const PORT_RESIDUAL = 1e-14;
/** relative change of the matrix entries that separates the eigenvalues of a defective matrix (critical damping, equal twins); the
 * smallest that brings the condition down is used, and it is an error of that size in the components */
export const DEFECT_NUDGES: readonly number[] = [1e-11, 1e-9, 1e-7];

// --- settling and observing -----------------------------------------------------------------------------------------------------

/** longest repeating pattern looked for, half-cycles */
export const LONGEST_PERIOD = 8;
/** a pattern repeats when every state returns to within this share of its largest recent value, several half-cycles running */
export const REPEAT_TOLERANCE = 1e-6;
/** floor of that comparison as a share of the mains peak (for a current: of the peak over 1 kOhm): 3 uV, 3 nA at 230 V */
export const REPEAT_FLOOR = 1e-8;
/** half-cycles simulated before observing a pattern that does not repeat, and half-cycles observed then */
export const SETTLE_HALF_CYCLES = 60;
export const OBSERVE_HALF_CYCLES = 120;
/** s, interval below which that search does not halve on */
export const PEAK_TIME = 1e-9;
/** relative accuracy to which the largest current of a segment is searched */
export const PEAK_TOLERANCE = 1e-4;

// --- what counts as what --------------------------------------------------------------------------------------------------------

/** default of the angle (degrees) by which conduction must end before the lamps' own current would have ended it to count as a drop-out:
 * the last 30 degrees of a half-cycle hold 2.9 % of a resistive lamp's energy (phase-cut closed form at 150 degrees), which no eye misses */
export const DROP_OUT_ANGLE = 30;
/** the lamps' own current counts as ended once it is below this share of the holding current: too little for any triac (our choice) */
export const OWN_CURRENT_SHARE = 0.05;
/** step in which the end of the lamps' own current is looked for, degrees: well under any sensible drop-out angle */
export const OWN_CURRENT_STEP = 0.1;
/** degrees after the first angle that can be no early end within which the lamps' own end is still looked for, so that the margin there
 * is not judged from 180 degrees */
export const OWN_END_DOUBT = 5;
/** largest modulation (max - min)/(max + min) of half-cycle energy within one polarity. Modulation at a quarter of twice the mains
 * frequency (25 or 30 Hz: every second full cycle differs) that gives a short-term flicker value PstLM of 1 (IEC TR 61547-1 filter,
 * for light that follows power without storage) */
export const variationLimit = (frequency: number): number => (frequency < 55 ? 0.008 : 0.01);
/** largest modulation between the polarities: IEEE 1789-2015 low-risk modulation, 0.025 % per Hz below 90 Hz (restated) */
export const polarityLimit = (frequency: number): number => 0.00025 * frequency;
/** share of the dial that a steady range must span for a conditional grade, %: less is of no use to whoever turns it (our choice) */
export const LEAST_STEADY_RANGE = 20;
/** degrees a conduction may reach into the next half-cycle before it counts as that half-cycle's own, fired at 0 */
export const CARRY_OVER_ANGLE = 10;

// --- waveforms ------------------------------------------------------------------------------------------------------------------

/** half-cycles shown: two mains cycles, so that a pattern of every second cycle shows */
export const WAVEFORM_HALF_CYCLES = 4;
/** even samples per half-cycle, besides the edges of every switching */
export const WAVEFORM_SAMPLES = 400;

// --- margins --------------------------------------------------------------------------------------------------------------------

/** a margin below this share marks a dial row as near an edge: parts scatter by more */
export const NEAR_EDGE = 0.01;
/** a current counts as having dipped once it has recovered to this multiple of its lowest value; the final decline never does */
export const DIP_RECOVERY = 1.1;
/** a ring is no longer looked at once it has decayed by this many e-foldings: to 0.1 % of what it was */
export const RING_FADED = 7;
/** samples per period of the fastest living ring when dips are looked for; each is refined afterwards */
export const DIP_SAMPLES = 8;
/** but at least this many in a visit shorter than the ring it rings with: most are a piece of one swing, and the search refines them */
export const DIP_PIECES = 3;
