import type { Transaction } from 'sequelize';
import type { PutTagInput } from '../contract/administration.js';
import type { Database } from '../lib/database.js';
import { Faults } from '../lib/faults.js';
import { inTransaction } from '../lib/in-transaction.js';
import { begin, end, holdsAt } from '../lib/validity.js';
import { modelsOf } from '../models/index.js';
import type { Tag } from '../models/tag.js';
import { bumpConfigVersion } from './bump-config-version.js';
import { namingChanges, type NamingChange } from './naming-change.js';
import { planRegisterRework } from './plan-register-rework.js';
import { readTag, type RegisterTag } from './read-register-items.js';
import { claimOfRow } from './replace-tags.js';
import { unitDisplay } from './unit-display.js';

/** What came of putting a tag on a unit. */
export interface TagPut {
  /** The unit that wore it until then; null when none did. */
  takenFrom: number | null;
  changes: NamingChange[];
}

/**
 * From an instant on a unit wears a tag. Another unit that wears it then is refused, unless it is
 * taken from that one, whose validity ends at the same instant.
 */
export async function putTag(
  db: Database,
  unitId: number,
  input: PutTagInput,
  now: Date,
  requestedBy: number | null,
): Promise<TagPut> {
  const faults = new Faults();
  const tag = readTag(input, faults, (name) => `/${name}`);
  if (input.validFrom > now) faults.add('/validFrom', 'must not lie ahead');
  faults.refuse();
  return inTransaction(db.sequelize, async (transaction) => {
    await bumpConfigVersion(transaction);
    const at = { ...tag, validFrom: input.validFrom };
    const put = await putOn(db, unitId, at, input.takeFrom, transaction);
    const words = `Tag put on ${await unitDisplay(db, unitId, transaction)}`;
    await planRegisterRework(transaction, { words, requestedBy, names: put.changes });
    return put;
  });
}

async function putOn(
  db: Database,
  unitId: number,
  tag: RegisterTag & { validFrom: Date },
  takeFrom: boolean,
  transaction: Transaction,
): Promise<TagPut> {
  const { Tag } = modelsOf(db.sequelize);
  const rows = await Tag.findAll({ where: { value: tag.value }, transaction });
  const before = rows.map(claimOfRow);
  const wearer = rows.find((row) => holdsAt(row, tag.validFrom));
  faultWearers(rows, wearer, { unitId, at: tag.validFrom, takeFrom });
  if (wearer) await wearer.update({ validTo: tag.validFrom }, { transaction });
  const { value, side, validFrom } = tag;
  await Tag.create({ unitId, value, side, validFrom, validTo: null }, { transaction });
  const after = [...rows.map(claimOfRow), { unitId, value, validFrom, validTo: null }];
  return { takenFrom: wearer?.unitId ?? null, changes: namingChanges('tag', before, after) };
}

interface Asked {
  unitId: number;
  at: Date;
  takeFrom: boolean;
}

function faultWearers(
  rows: readonly Tag[],
  wearer: Tag | undefined,
  { unitId, at, takeFrom }: Asked,
): void {
  const faults = new Faults();
  const begun = rows.filter((row) => begin(row) >= at.getTime() && end(row) > at.getTime());
  if (wearer?.unitId === unitId) {
    faults.add('/value', 'is worn by this car or box at that time already');
  } else if (begun.length > 0) {
    faults.add('/validFrom', 'lies before another car or box, or this one, put the tag on');
  } else if (wearer && !takeFrom) {
    faults.add(
      '/value',
      'belongs to another car or box at that time; takeFrom takes it from there',
    );
  }
  faults.refuse();
}
