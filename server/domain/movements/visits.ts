import type { UnitRef } from './configuration.js';
import {
  compareReads,
  evidenceOf,
  firstRead,
  lastReadAt,
  mergeEvidence,
  type Evidence,
  type UsableRead,
} from './evidence.js';

/** The reads of one unit at one read point with no gap above the read point's visit gap. */
export interface Visit {
  unit: UnitRef;
  evidence: Evidence;
}

/** Visits of one unit from its reads at one read point, in order of their first reads. */
export function visitsOf(unit: UnitRef, reads: readonly UsableRead[], gapMs: number): Visit[] {
  const chains: UsableRead[][] = [];
  for (const read of [...reads].sort(compareReads)) {
    const chain = chains.at(-1);
    const last = chain?.at(-1);
    if (chain && last && read.at - last.at <= gapMs) chain.push(read);
    else chains.push([read]);
  }
  return chains.map((chain) => ({ unit, evidence: evidenceOf(chain) }));
}

/** Visits of one unit at one read point, some old, some new, with those that touch made one. */
export function mergeVisits(visits: readonly Visit[], gapMs: number): Visit[] {
  const merged: Visit[] = [];
  for (const visit of [...visits].sort(compareVisits)) {
    const before = merged.at(-1);
    if (before && firstRead(visit.evidence).at - lastReadAt(before.evidence) <= gapMs) {
      before.evidence = mergeEvidence(before.evidence, visit.evidence);
    } else {
      merged.push({ ...visit });
    }
  }
  return merged;
}

/** Order of visits at one read point: by their first reads. */
export function compareVisits(a: Visit, b: Visit): number {
  return compareReads(firstRead(a.evidence), firstRead(b.evidence));
}
