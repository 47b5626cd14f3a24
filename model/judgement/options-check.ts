/** Refuses a supply band or a range of an assumed value that makes no sense. */
import type { Issue } from '../pairing-check.ts';
import type { JudgeOptions } from '../verdict.ts';

export function checkJudgeExtras({ supplyBand, assumed = [] }: JudgeOptions): Issue[] {
  const issues: Issue[] = [];
  if (supplyBand !== undefined && !(supplyBand.low > 0 && supplyBand.low <= 1)) {
    issues.push({ path: 'supplyBand.low', message: `must be above 0 and at most 1 times the nominal voltage, not ${supplyBand.low}` });
  }
  if (supplyBand !== undefined && !(supplyBand.high >= 1 && Number.isFinite(supplyBand.high))) {
    issues.push({ path: 'supplyBand.high', message: `must be at least 1 times the nominal voltage, not ${supplyBand.high}` });
  }
  assumed.forEach(({ range }, k) => {
    if (range !== null && !(range.low >= 0 && range.high >= range.low && Number.isFinite(range.high))) {
      issues.push({ path: `assumed[${k}].range`, message: 'must run from 0 or more up to a finite number' });
    }
  });
  return issues;
}
