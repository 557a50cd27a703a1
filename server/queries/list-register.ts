import { Op } from 'sequelize';
import { z } from 'zod';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import type { Identity } from '../models/identity.js';
import { modelsOf } from '../models/index.js';
import type { Organisation } from '../models/organisation.js';
import type { Tag } from '../models/tag.js';
import type { Unit } from '../models/unit.js';
import { registeredIdsByCompact } from './registered-ids-by-compact.js';

/** A registered unit with what belongs to it. */
export interface RegisteredUnit {
  unit: Unit;
  identity: Identity;
  /** Identities before that, the last first. */
  formerly: Identity[];
  owner: Pick<Organisation, 'code'> | null;
  tags: Tag[];
}

/** Registered units by id; of one owner when it is given. */
export async function listRegister(
  db: Database,
  query: { limit: number; cursor?: string | undefined; owner?: string | undefined },
) {
  const { Organisation, Unit } = modelsOf(db.sequelize);
  const after = readCursor(query.cursor, z.int().min(0)) ?? 0;
  const owner = query.owner === undefined ? {} : { where: { code: query.owner }, required: true };
  const units = await Unit.findAll({
    where: { id: { [Op.gt]: after }, registered: true },
    include: [{ model: Organisation, as: 'owner', attributes: ['id', 'code'], ...owner }],
    order: [['id', 'ASC']],
    limit: query.limit + 1,
  });
  const { rows, next } = pageFrom(units, query.limit, (last) => last.id);
  return { rows: await withParts(db, rows), next };
}

/** The registered units with these compact identities, in that order; others are left out. */
export async function findRegistered(db: Database, compacts: string[]): Promise<RegisteredUnit[]> {
  const { Organisation, Unit } = modelsOf(db.sequelize);
  const ids = await registeredIdsByCompact(db, compacts);
  const units = await Unit.findAll({
    where: { id: [...new Set(ids.values())], registered: true },
    include: [{ model: Organisation, as: 'owner', attributes: ['id', 'code'] }],
  });
  const byId = new Map((await withParts(db, units)).map((one) => [one.unit.id, one]));
  return compacts.flatMap((compact) => byId.get(ids.get(compact) ?? 0) ?? []);
}

async function withParts(db: Database, units: Unit[]): Promise<RegisteredUnit[]> {
  const { Identity, Tag } = modelsOf(db.sequelize);
  const unitId = units.map((unit) => unit.id);
  const [identities, tags] = await Promise.all([
    // The last of a unit's identities is the one it goes by: those without an end come last.
    Identity.findAll({
      where: { unitId },
      order: [
        [db.sequelize.literal('valid_to IS NULL'), 'ASC'],
        ['validTo', 'ASC'],
        ['id', 'ASC'],
      ],
    }),
    Tag.findAll({ where: { unitId }, order: [['id', 'ASC']] }),
  ]);
  const identitiesOf = new Map<number, Identity[]>(unitId.map((id) => [id, []]));
  for (const identity of identities) identitiesOf.get(identity.unitId)?.unshift(identity);
  const tagsOf = new Map<number, Tag[]>(unitId.map((id) => [id, []]));
  for (const tag of tags) tagsOf.get(tag.unitId)?.push(tag);
  return units.flatMap((unit) => {
    const [identity, ...formerly] = identitiesOf.get(unit.id) ?? [];
    const parts = { unit, owner: unit.owner ?? null, tags: tagsOf.get(unit.id) ?? [] };
    return identity ? { ...parts, identity, formerly } : [];
  });
}
