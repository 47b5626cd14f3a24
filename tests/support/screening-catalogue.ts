/** A catalogue for screenings: filament lamps and dimmers of an invented guest house, cheap to judge at one dial position. */
import { type EntryStore, entryStore } from '../../db/entries.ts';
import type { RecordDatabase } from '../../db/record.ts';
import { putEntry } from '../../server/catalogue/entries.ts';
import type { DimmerEntry, LampEntry } from '../../server/schemas/entry.ts';
import { type AskedScreening, askedScreening } from '../../server/schemas/screening.ts';
import { FIXED_NOW } from './server-temporary-record.ts';

export function lampEntryOf(index: number): LampEntry {
  return {
    name: `Reading lamp ${index}`,
    tags: [index % 2 === 0 ? 'even' : 'odd'],
    lamp: { ratedPower_W: 25, load: { kind: 'resistive', resistance_Ohm: 500 + index } },
  };
}

export function dimmerEntryOf(index: number): DimmerEntry {
  return { name: `Hall dimmer ${index}`, dimmer: { latchingCurrent_mA: 50, holdingCurrent_mA: 30, turnOffTime_us: index } };
}

export const lampId = (index: number): string => `lamp-${String(index).padStart(5, '0')}`;
export const dimmerId = (index: number): string => `dimmer-${String(index).padStart(5, '0')}`;

export function fillCatalogue(record: RecordDatabase, lamps: number, dimmers: number): EntryStore {
  const store = entryStore(record);
  store.together(() => {
    for (let index = 0; index < lamps; index += 1) {
      putEntry(store, lampId(index), { kind: 'lamp', entry: lampEntryOf(index) }, { kind: 'unstated' }, FIXED_NOW);
    }
    for (let index = 0; index < dimmers; index += 1) {
      putEntry(store, dimmerId(index), { kind: 'dimmer', entry: dimmerEntryOf(index) }, { kind: 'unstated' }, FIXED_NOW);
    }
  });
  return store;
}

/** Everything with everything, at one dial position and the nominal corner. */
export function cheapScreening(changes: object = {}): AskedScreening {
  return askedScreening.parse({
    lamps: { all: true },
    dimmers: { all: true },
    mains: { voltage_V: 230, frequency_Hz: 50 },
    options: { dialPositions_pct: [70], corners: 'nominal' },
    ...changes,
  });
}
