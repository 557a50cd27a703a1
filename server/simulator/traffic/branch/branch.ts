import type { Pass } from '../pass.js';
import { branchPasses } from './branch-passes.js';
import { looseReads, type LooseRead } from './loose-reads.js';
import { roundNumberAt, roundOf, type Round } from './round.js';
import { handReports, movementReports, type HandReport, type MovementReport } from './told.js';

/** What happens on the branch in a span. */
export interface BranchEvents {
  passes: Pass[];
  loose: LooseRead[];
  reports: MovementReport[];
  handReports: HandReport[];
}

/**
 * The branch west of Alder Bend: two trains and a switcher that do the same every four days, so
 * that each case of the railway stands at a fixed place on a fixed car. A pure function of seed
 * and time, apart from the rest of the region, on tracks that nothing else uses.
 */
export class Branch {
  private readonly rounds = new Map<number, BranchEvents>();

  constructor(private readonly seed: string) {}

  /** What begins in [from, to). */
  between(from: number, to: number): BranchEvents {
    const numbers = roundNumbers(from, to);
    for (const known of this.rounds.keys()) {
      if (!numbers.includes(known)) this.rounds.delete(known);
    }
    const events = numbers.map((number) => this.round(number));
    const isDue = ({ at }: { at: number }) => at >= from && at < to;
    return {
      passes: events.flatMap(({ passes }) => passes.filter(isDue)),
      loose: events.flatMap(({ loose }) => loose.filter(isDue)),
      reports: events.flatMap(({ reports }) => reports.filter(isDue)),
      handReports: events.flatMap((each) => each.handReports.filter(isDue)),
    };
  }

  private round(number: number): BranchEvents {
    const known = this.rounds.get(number);
    if (known) return known;
    const events = eventsOf(roundOf(this.seed, number));
    this.rounds.set(number, events);
    return events;
  }
}

/** The rounds that have a part in [from, to). */
export function roundNumbers(from: number, to: number): number[] {
  const [first, last] = [roundNumberAt(from), roundNumberAt(to)];
  return Array.from({ length: Math.max(0, last - first + 1) }, (_, index) => first + index);
}

function eventsOf(round: Round): BranchEvents {
  return {
    passes: branchPasses(round),
    loose: looseReads(round),
    reports: movementReports(round),
    handReports: handReports(round),
  };
}
