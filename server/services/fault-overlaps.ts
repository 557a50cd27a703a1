import { Faults } from '../lib/faults.js';
import { overlaps } from '../lib/validity.js';
import type { NamingRow } from './naming-change.js';

/** A tag or identity that a unit is to have. */
export interface NamingClaim extends NamingRow {
  /** Where the body says it; null for one that stands already. */
  pointer: string | null;
}

/**
 * Throws a 400 problem with a fault at each claim that would make its tag or identity name two
 * units at once, or one twice. Claims without a pointer are never at fault, so give them first.
 */
export function faultOverlaps(claims: readonly NamingClaim[]): void {
  const faults = new Faults();
  const byValue = new Map<string, NamingClaim[]>();
  for (const claim of claims) {
    const earlier = byValue.get(claim.value) ?? [];
    const other = earlier.find((one) => overlaps(one, claim));
    if (other && claim.pointer !== null) {
      const detail =
        other.unitId === claim.unitId
          ? 'is given twice for the same time'
          : 'belongs to another car or box at that time';
      faults.add(claim.pointer, detail);
    }
    byValue.set(claim.value, [...earlier, claim]);
  }
  faults.refuse();
}
