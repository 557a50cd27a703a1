import type { TagSide } from '../../domain/identifiers/aei.js';
import { branchCars } from './branch-cars.js';
import { units, type DemoUnit } from './equipment.js';
import { lastMoveOf } from './lent-tag.js';

/** A tag on the register, on one car from one instant to before another (ms; null: open). */
export interface TagSpell {
  unit: string;
  value: string;
  side: TagSide | null;
  validFrom: number | null;
  validTo: number | null;
}

/**
 * The tags of the register as somebody who keeps it well has them at `now`: the tag that was lent
 * is dated by its last move. What the impostor wears is not known.
 */
export function tagSpellsAt(now: number): TagSpell[] {
  return units.filter(({ owner }) => owner !== null).flatMap((unit) => spellsOf(unit, now));
}

function spellsOf({ identity, tags }: DemoUnit, now: number): TagSpell[] {
  const { compact: unit } = identity;
  const { lent } = branchCars;
  return tags.flatMap(({ value, side }): TagSpell[] => {
    if (unit !== lent.from || side !== 'left') {
      return [{ unit, value, side, validFrom: null, validTo: null }];
    }
    const move = lastMoveOf(now);
    return [
      { unit: move.from, value, side, validFrom: null, validTo: move.at },
      { unit: move.to, value, side, validFrom: move.at, validTo: null },
    ];
  });
}
