import type { Transaction } from 'sequelize';
import { batchPointer, type Batch } from '../lib/batch.js';
import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';
import type { Tag } from '../models/tag.js';
import { faultOverlaps, type NamingClaim } from './fault-overlaps.js';
import { namingChanges, type NamingChange } from './naming-change.js';
import type { RegisterItem, RegisterTag } from './read-register-items.js';

type Claim = RegisterTag & NamingClaim;

/**
 * Gives units exactly the tags their items list; items without a list keep theirs. At any
 * instant a tag names one unit: claims that overlap are refused with a pointer.
 */
export async function replaceTags(
  db: Database,
  batch: Batch<RegisterItem>,
  unitIds: Map<string, number>,
  transaction: Transaction,
): Promise<NamingChange[]> {
  const claims = claimsOf(batch, unitIds);
  const replaced = new Set(
    batch.items.flatMap(({ tags, identity }) =>
      tags ? (unitIds.get(identity.compact) ?? []) : [],
    ),
  );
  if (replaced.size === 0) return [];
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
  const before = [...standing, ...present.map(claimOfRow)];
  return namingChanges('tag', before, [...standing, ...claims]);
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

/** A tag that stands, as a claim. */
export function claimOfRow(tag: Tag): Claim {
  const side = tag.side === 'left' || tag.side === 'right' ? tag.side : null;
  // The column is binary, so that no collation compares it: it comes as bytes.
  const value = Buffer.from(tag.value).toString('utf8');
  const { unitId, validFrom, validTo } = tag;
  return { unitId, value, side, validFrom, validTo, pointer: null };
}

function keyOf({ unitId, value, side, validFrom, validTo }: Claim): string {
  return [unitId, side, validFrom?.getTime(), validTo?.getTime(), value].join(' ');
}
