/**
 * How long a whole night's list takes, from a part of it: pairings spread evenly over 500 lamps x 40 dimmers are judged on one thread, and
 * the whole is reckoned from their mean, with the uncertainty that so small a part leaves.
 */
import { startSimulationPool } from '../server/simulation/simulation-pool.ts';
import { completePairing } from '../server/verdicts/pairing-completion.ts';
import { toModel } from '../server/verdicts/pairing-to-model.ts';
import { figure } from './bench-figures.ts';
import { guestHouseDimmer, guestHouseLamp } from './guest-house-lists.ts';
import { wholeCatalogue } from './screening-bench-parts.ts';

const LAMPS = 500;
const DIMMERS = 40;
/** share that runs over both lists without repeating early: the golden section */
const GOLDEN = (Math.sqrt(5) - 1) / 2;
/** standard errors on either side that hold the mean in 95 of 100 such samples */
const NINETY_FIVE = 1.96;

export async function reckonNight(sample: number): Promise<void> {
  console.log(`\nA night: ${LAMPS} lamps x ${DIMMERS} dimmers, from ${sample} of their ${LAMPS * DIMMERS} pairings`);
  const pool = startSimulationPool({ threads: 1, queueLimit: 1 });
  const { mains } = wholeCatalogue();
  const took: number[] = [];
  const grades = new Map<string, number>();
  try {
    for (let index = -1; index < sample; index += 1) {
      const pair = Math.floor((((index + 1) * GOLDEN) % 1) * LAMPS * DIMMERS);
      const lamp = guestHouseLamp(Math.floor(pair / DIMMERS));
      const dimmer = guestHouseDimmer(pair % DIMMERS);
      const { pairing, options } = toModel(completePairing({ mains, dimmer, lamps: [{ count: 1, lamp }] }));
      const judged = await pool.judgeInBackground(pairing, options);
      if (!judged.ok) throw new Error(`A pairing of the list cannot be judged: ${JSON.stringify(judged.failure)}`);
      // The first one starts the thread, and is not measured.
      if (index < 0) continue;
      took.push(judged.took_ms / 1000);
      grades.set(judged.value.grade, (grades.get(judged.value.grade) ?? 0) + 1);
    }
  } finally {
    await pool.destroy();
  }
  const mean = took.reduce((sum, each) => sum + each, 0) / took.length;
  const variance = took.reduce((sum, each) => sum + (each - mean) ** 2, 0) / (took.length - 1);
  const error = (NINETY_FIVE * Math.sqrt(variance / took.length)) / mean;
  const hours = (workers: number) => (LAMPS * DIMMERS * mean) / 3600 / workers;
  const range = (workers: number) =>
    `${figure(hours(workers))} h (${figure(hours(workers) * (1 - error))} to ${figure(hours(workers) * (1 + error))})`;
  console.log(`  ${figure(mean)} s a pairing on one thread, from ${figure(Math.min(...took))} to ${figure(Math.max(...took))} s`);
  console.log(`  grades: ${[...grades].map(([grade, count]) => `${count} ${grade}`).join(', ')}`);
  console.log(`  the whole list: one worker ${range(1)}, two workers ${range(2)}; in brackets the 95 % that the sample leaves open`);
  console.log('  two workers are reckoned as twice one: what is measured above as scaling comes off it');
}
