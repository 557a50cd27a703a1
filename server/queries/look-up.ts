import type { Database } from '../lib/database.js';
import type { Actor } from '../policies/actor.js';
import { findOpenableUnits } from './find-openable-units.js';
import { listUnitIds } from './list-unit-ids.js';
import { loadEquipment, type Equipment, type IdentityRow } from './load-equipment.js';
import { seesSite, unitSourcesOf } from './narrow-units.js';
import { exactCondition, findCandidates, identityMatches } from './search-units.js';
import { ask, likeText, sql } from './sql.js';

const MOST_UNITS = 10;
const MOST_SITES = 5;

export interface FoundSite {
  code: string;
  name: string;
  kind: string;
}

/** A unit with the former identity that it was found by; null where its present one was meant. */
export type FoundEquipment = Equipment & { foundBy: IdentityRow | null };

/**
 * Equipment that the text names, present numbers before former ones: by a whole number all that the person may open, then, of their
 * lists, what it only begins (or, when it begins nothing, is part of).
 */
export async function lookUpUnits(
  db: Database,
  actor: Actor,
  text: string,
  now: Date,
): Promise<FoundEquipment[]> {
  const whole = await lookUpWhole(db, actor, text);
  const { unitIds: parts } = await listUnitIds(db, {
    sources: unitSourcesOf(actor),
    filters: {},
    search: text,
    sort: 'unit',
    limit: MOST_UNITS,
    now,
  });
  const unitIds = [...new Set([...whole, ...parts])].slice(0, MOST_UNITS);
  const found = (await loadEquipment(db, unitIds, now)).map((unit) => {
    const matching = unit.identities.filter((identity) => identityMatches(identity, text));
    const [first = null] = matching;
    return { ...unit, foundBy: matching.includes(unit.identities[0]) ? null : first };
  });
  const isWhole = ({ row }: FoundEquipment) => whole.includes(row.unit_id);
  const place = (unit: FoundEquipment) => (isWhole(unit) ? 0 : 2) + (unit.foundBy ? 1 : 0);
  return found.sort((a, b) => place(a) - place(b));
}

async function lookUpWhole(db: Database, actor: Actor, text: string): Promise<number[]> {
  const condition = exactCondition(text);
  const candidates = condition && (await findCandidates(db, condition));
  if (!candidates) return [];
  const openable = await findOpenableUnits(db, actor, candidates);
  return candidates.filter((unitId) => openable.has(unitId));
}

/** Sites by the beginning of their code or a part of their name, of those the person has a view of. */
export async function lookUpSites(db: Database, actor: Actor, text: string): Promise<FoundSite[]> {
  const sources = unitSourcesOf(actor);
  const pattern = likeText(text.trim());
  const code = text.trim().toUpperCase();
  const byCode = /^[A-Z0-9]{1,16}$/.test(code) ? sql`code LIKE ${`${code}%`}` : sql`FALSE`;
  const rows = await ask<FoundSite & { id: number }>(
    db,
    sql`SELECT id, code, name, kind FROM sites WHERE ${byCode} OR name LIKE ${`%${pattern}%`}
      ORDER BY IF(${byCode}, 0, 1), name LIKE ${`${pattern}%`} DESC, CHAR_LENGTH(code), name`,
  );
  return rows.filter((site) => seesSite(sources, site.id)).slice(0, MOST_SITES);
}
