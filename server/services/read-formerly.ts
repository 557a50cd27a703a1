import type { RegisterInput } from '../contract/administration.js';
import type { Identity } from '../domain/identifiers/identity.js';
import type { Faults } from '../lib/faults.js';
import { overlaps } from '../lib/validity.js';
import { readIdentity } from './read-identity.js';

/** A mark and number that a unit carried once. */
export interface FormerIdentity {
  identity: Identity;
  /** Null: nobody knows of an earlier one. */
  validFrom: Date | null;
  validTo: Date;
}

/**
 * Former identities of one item. A car carries one number at a time: where it is not said from
 * when, one begins where the one before it ended. Faults are added.
 */
export function readFormerly(
  given: NonNullable<RegisterInput['formerly']>,
  faults: Faults,
  at: (...path: PropertyKey[]) => string,
  now: Date,
): FormerIdentity[] {
  const formers = given.map(({ unit, validFrom, validTo }, place) => {
    const pointer = (name: string) => at('formerly', place, name);
    if (validTo > now) faults.add(pointer('validTo'), 'must not lie ahead');
    if (validFrom && validFrom >= validTo) {
      faults.add(pointer('validTo'), 'must be later than validFrom');
    }
    const ends = given.map((other) => other.validTo.getTime()).filter((end) => end < +validTo);
    const earlier = ends.length > 0 ? new Date(Math.max(...ends)) : null;
    const identity = readIdentity(unit, faults, pointer('unit'));
    return { identity, validFrom: validFrom ?? earlier, validTo };
  });
  formers.forEach((former, place) => {
    if (!formers.slice(0, place).some((other) => overlaps(other, former))) return;
    faults.add(at('formerly', place), 'overlaps another number of this car or box');
  });
  return formers;
}
