import type { WatchScope } from '../contract/watches.js';
import { parseUnit } from '../domain/identifiers/parse-unit.js';
import type { ProblemFault } from '../errors.js';
import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';
import type { StoredScope } from '../models/watch.js';
import type { Actor } from '../policies/actor.js';
import { mayNameOwner, mayNameSite } from '../policies/watch-policy.js';
import { unitIdsWithin, unitSourcesOf } from '../queries/narrow-units.js';
import { ask, sql } from '../queries/sql.js';
import { unitsByIdentity } from '../queries/unit-names.js';

/** The ids behind a part of a scope, in order, and what is wrong with it. */
interface Resolved {
  ids: number[];
  faults: ProblemFault[];
}

/**
 * Turns what a person names into our own ids. Faults (with pointers below `/scope`) name what is
 * not there or not for this person to see, in the same words.
 */
export async function resolveScope(
  db: Database,
  actor: Actor,
  scope: WatchScope,
  now: Date,
): Promise<{ scope: StoredScope; faults: ProblemFault[] }> {
  const [units, owners, sites] = await Promise.all([
    resolveUnits(db, actor, scope.units ?? [], now),
    resolveOwners(db, actor, scope.owners ?? []),
    resolveSites(db, actor, scope.sites ?? []),
  ]);
  return {
    scope: {
      ...(scope.units ? { unitIds: units.ids } : {}),
      ...(scope.marks ? { marks: unique(scope.marks) } : {}),
      ...(scope.kinds ? { kinds: unique(scope.kinds) } : {}),
      ...(scope.owners ? { ownerIds: owners.ids } : {}),
      ...(scope.sites ? { siteIds: sites.ids } : {}),
    },
    faults: [...units.faults, ...owners.faults, ...sites.faults],
  };
}

async function resolveUnits(
  db: Database,
  actor: Actor,
  texts: string[],
  now: Date,
): Promise<Resolved> {
  const parsed = texts.map((text) => parseUnit(text));
  const compacts = parsed.flatMap((unit) => (unit.kind === 'unit' ? unit.identity.compact : []));
  const holders = await unitsByIdentity(db, compacts, now);
  const seen = await unitsInSight(db, actor, [...holders.values()]);
  return gather('/scope/units', parsed, (unit) => {
    if (unit.kind === 'wrong') return unit.detail;
    if (unit.kind === 'number') return 'needs its mark too';
    const id = holders.get(unit.identity.compact);
    return id !== undefined && seen.has(id) ? id : 'is not one that you may see';
  });
}

async function unitsInSight(db: Database, actor: Actor, ids: number[]): Promise<Set<number>> {
  if (ids.length === 0) return new Set();
  const inSight = unitIdsWithin(unitSourcesOf(actor), sql`s.unit_id IN (${ids})`);
  const rows = await ask<{ unit_id: number }>(db, inSight);
  return new Set(rows.map((row) => row.unit_id));
}

async function resolveOwners(db: Database, actor: Actor, ids: number[]): Promise<Resolved> {
  const { Organisation } = modelsOf(db.sequelize);
  const found = await Organisation.findAll({ where: { id: ids }, attributes: ['id'] });
  const known = new Set(found.map((organisation) => organisation.id));
  return gather('/scope/owners', ids, (id) =>
    known.has(id) && mayNameOwner(actor, id) ? id : 'is not one that you may see',
  );
}

async function resolveSites(db: Database, actor: Actor, codes: string[]): Promise<Resolved> {
  const { Site } = modelsOf(db.sequelize);
  const found = await Site.findAll({ where: { code: codes }, attributes: ['id', 'code'] });
  const ids = new Map(found.map((site) => [site.code, site.id] as const));
  return gather('/scope/sites', codes, (code) => {
    const id = ids.get(code);
    return id !== undefined && mayNameSite(actor, id) ? id : 'is not one of your sites';
  });
}

function gather<T>(pointer: string, items: T[], resolve: (item: T) => number | string): Resolved {
  const results = items.map(resolve);
  return {
    ids: unique(results.filter((result) => typeof result === 'number')),
    faults: results.flatMap((result, index) =>
      typeof result === 'string' ? { pointer: `${pointer}/${index}`, detail: result } : [],
    ),
  };
}

function unique<T>(items: T[]): T[] {
  return [...new Set(items)];
}
