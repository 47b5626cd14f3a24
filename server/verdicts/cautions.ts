/** What every verdict says whatever its grade: mains can kill, and a simulation is not a test. */
export const CAUTIONS: readonly string[] = [
  'Mains voltage can kill. Work on fixed wiring is for a licensed person, to the local wiring code, with the circuit isolated and proved dead; a dimmer that is turned off does not isolate it.',
  'This is a screening by simulation, not a type test: it does not replace trying the lamps on the dimmer, nor any approval.',
  'An added resistor turns mains power to heat and runs hot: it needs its rating, its clearance and its enclosure.',
  "Follow both makers' instructions. Where they exclude a lamp or a load that this verdict calls suitable, they are right.",
  'Values listed under assumptions were not given but filled in; another value can give another verdict.',
  'Waveforms and figures are of the model, not of a measured circuit.',
];
