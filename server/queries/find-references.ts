import { invalid, type ProblemFault } from '../errors.js';
import type { Database } from '../lib/database.js';
import { ask, sql } from './sql.js';

/** Ids for the site code and the owner (code or id) of a query; 400 with a pointer for each unknown. */
export async function findReferences(
  db: Database,
  query: { site?: string | undefined; owner?: string | undefined },
): Promise<{ siteId?: number; ownerId?: number }> {
  const [siteId, ownerId] = await Promise.all([
    query.site === undefined ? undefined : siteIdOf(db, query.site),
    query.owner === undefined ? undefined : ownerIdOf(db, query.owner),
  ]);
  const faults: ProblemFault[] = [];
  if (siteId === null) faults.push({ pointer: '?site', detail: 'is not the code of a site' });
  if (ownerId === null) {
    faults.push({ pointer: '?owner', detail: 'is not the id or code of an organisation' });
  }
  if (faults.length > 0) throw invalid('The filter names something that is not there.', faults);
  return {
    ...(siteId === undefined || siteId === null ? {} : { siteId }),
    ...(ownerId === undefined || ownerId === null ? {} : { ownerId }),
  };
}

async function siteIdOf(db: Database, code: string): Promise<number | null> {
  const [site] = await ask<{ id: number }>(db, sql`SELECT id FROM sites WHERE code = ${code}`);
  return site?.id ?? null;
}

/** A code of digits alone goes before the id it looks like. */
async function ownerIdOf(db: Database, owner: string): Promise<number | null> {
  const id = /^[0-9]{1,9}$/.test(owner) ? Number(owner) : 0;
  const [organisation] = await ask<{ id: number }>(
    db,
    sql`SELECT id FROM organisations WHERE code = ${owner} OR id = ${id}
      ORDER BY code = ${owner} DESC LIMIT 1`,
  );
  return organisation?.id ?? null;
}
