/** Everything the service asks of an open record, each family of statements prepared once. */
import { type EntryStore, entryStore } from './entries.ts';
import { type EntrySearch, entrySearch } from './entry-search.ts';
import { type ImportStaging, importStaging } from './import-staging.ts';
import { type JudgedPairs, judgedPairs } from './judged-pairs.ts';
import { type PartnerSearch, partnerSearch } from './partner-search.ts';
import type { RecordDatabase } from './record.ts';
import { type RecordChanges, recordChanges } from './record-changes.ts';
import { type RequirementStore, requirementStore } from './requirements.ts';
import { type ScreeningPages, screeningPages } from './screening-pages.ts';
import { type ScreeningSelection, screeningSelection } from './screening-selection.ts';
import { type StalePairs, stalePairs } from './screening-stale.ts';
import { type ScreeningVerdicts, screeningVerdicts } from './screening-verdicts.ts';
import { type ScreeningStore, screeningStore } from './screenings.ts';
import { type VerdictSearch, verdictSearch } from './verdict-search.ts';
import { type VerdictStore, verdictStore } from './verdicts.ts';

export interface Stores {
  readonly verdicts: VerdictStore;
  readonly verdictSearch: VerdictSearch;
  readonly requirements: RequirementStore;
  readonly judgedPairs: JudgedPairs;
  readonly partnerSearch: PartnerSearch;
  readonly entries: EntryStore;
  readonly entrySearch: EntrySearch;
  readonly importStaging: ImportStaging;
  readonly recordChanges: RecordChanges;
  readonly screenings: ScreeningStore;
  readonly screeningSelection: ScreeningSelection;
  readonly screeningPages: ScreeningPages;
  readonly screeningVerdicts: ScreeningVerdicts;
  readonly stalePairs: StalePairs;
}

export function storesOf(record: RecordDatabase): Stores {
  return {
    verdicts: verdictStore(record),
    verdictSearch: verdictSearch(record),
    requirements: requirementStore(record),
    judgedPairs: judgedPairs(record),
    partnerSearch: partnerSearch(record),
    entries: entryStore(record),
    entrySearch: entrySearch(record),
    importStaging: importStaging(record),
    recordChanges: recordChanges(record),
    screenings: screeningStore(record),
    screeningSelection: screeningSelection(record),
    screeningPages: screeningPages(record),
    screeningVerdicts: screeningVerdicts(record),
    stalePairs: stalePairs(record),
  };
}
