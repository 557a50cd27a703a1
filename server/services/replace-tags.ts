import type { Transaction } from 'sequelize';
import { batchPointer, type Batch } from '../lib/batch.js';
import type { Database } from '../lib/database.js';
import { Faults } from '../lib/faults.js';
import { modelsOf } from '../models/index.js';
import type { Tag } from '../models/tag.js';
import type { RegisterItem, RegisterTag } from './read-register-items.js';

interface Claim extends RegisterTag {
  unitId: number;
  /** Where the body says it; null for a tag that stands already. */
  pointer: string | null;
}

/**
 * Gives units exactly the tags their items list; items without a list keep theirs. At any
 * instant a tag names one unit: claims that overlap are refused with a pointer.
 */
export async function replaceTags(
  db: Database,
  batch: Batch<RegisterItem>,
  unitIds: Map<string, number>,
  transaction: Transaction,
): Promise<void> {
  const claims = claimsOf(batch, unitIds);
  const replaced = new Set(
    batch.items.flatMap(({ tags, identity }) =>
      tags ? (unitIds.get(identity.compact) ?? []) : [],
    ),
  );
  if (replaced.size === 0) return;
  const { Tag } = modelsOf(db.sequelize);
  const present = await Tag.findAll({ where: { unitId: [...replaced] }, transaction });
  const values = [...new Set(claims.map(({ value }) => value))];
  const elsewhere = await Tag.findAll({ where: { value: values }, transaction });
  const standing = elsewhere.filter((tag) => !replaced.has(tag.unitId)).map(claimOfRow);
  faultOverlaps([...standing, ...claims]);

  const wanted = new Set(claims.map(keyOf));
  const kept = new Set(present.map((tag) => keyOf(claimOfRow(tag))));
  const gone = present.filter((tag) => !wanted.has(keyOf(claimOfRow(tag))));
  if (gone.length > 0) await Tag.destroy({ where: { id: gone.map(({ id }) => id) }, transaction });
  const added = claims.filter((claim) => !kept.has(keyOf(claim)));
  await Tag.bulkCreate(
    added.map(({ unitId, value, side, validFrom, validTo }) => ({
      unitId,
      value,
      side,
      validFrom,
      validTo,
    })),
    { transaction },
  );
}

function claimsOf(batch: Batch<RegisterItem>, unitIds: Map<string, number>): Claim[] {
  return batch.items.flatMap(({ identity, tags = [] }, index) =>
    tags.map((tag, place) => ({
      ...tag,
      unitId: unitIds.get(identity.compact) ?? 0,
      pointer: batchPointer(batch, index, 'tags', place, 'value'),
    })),
  );
}

function claimOfRow(tag: Tag): Claim {
  const side = tag.side === 'left' || tag.side === 'right' ? tag.side : null;
  // The column is binary, so that no collation compares it: it comes as bytes.
  const value = Buffer.from(tag.value).toString('utf8');
  const { unitId, validFrom, validTo } = tag;
  return { unitId, value, side, validFrom, validTo, pointer: null };
}

function keyOf({ unitId, value, side, validFrom, validTo }: Claim): string {
  return [unitId, side, validFrom?.getTime(), validTo?.getTime(), value].join(' ');
}

function faultOverlaps(claims: Claim[]): void {
  const faults = new Faults();
  const byValue = new Map<string, Claim[]>();
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

function overlaps(a: RegisterTag, b: RegisterTag): boolean {
  const from = (tag: RegisterTag) => tag.validFrom?.getTime() ?? -Infinity;
  const to = (tag: RegisterTag) => tag.validTo?.getTime() ?? Infinity;
  return from(a) < to(b) && from(b) < to(a);
}
