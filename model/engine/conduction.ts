/**
 * The conduction that is under way, and the half-cycle it counts for: the one in which it began, until it goes on far into the next
 * without a firing. Angles in degrees since the running half-cycle's zero crossing.
 */
import { CARRY_OVER_ANGLE } from '../tolerances.ts';
import type { HalfCycle } from './half-cycle.ts';

export class Conduction {
  /** null while nothing conducts */
  record: HalfCycle | null = null;
  private since = 0;

  begin(record: HalfCycle, angle: number): void {
    record.firings.push(angle);
    this.record = record;
    this.since = angle;
  }

  end(running: HalfCycle, angle: number): void {
    const began = this.record;
    if (began === null) return;
    const end = angle + (running.index - began.index) * 180;
    began.ends.push(end);
    began.conduction += end - this.since;
    this.record = null;
  }

  forget(): void {
    this.record = null;
  }

  /** at the end of a half-cycle without a firing into which a conduction came: a current too steep to turn off is that one's own too */
  carryOver(from: HalfCycle, running: HalfCycle): void {
    if (this.record === from) {
      from.ends.push(180);
      from.conduction += 180 - this.since;
      this.record = running;
      this.since = 0;
      running.firings.push(0);
      return;
    }
    const end = (from.ends[from.ends.length - 1] as number) - 180;
    if (end <= CARRY_OVER_ANGLE) return;
    from.ends[from.ends.length - 1] = 180;
    from.conduction -= end;
    running.firings.push(0);
    running.ends.push(end);
    running.conduction += end;
  }
}
