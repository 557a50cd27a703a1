import type { Database } from '../../server/lib/database.js';
import type { Organisation } from '../../server/models/organisation.js';
import type { Site } from '../../server/models/site.js';

/** SQL for `count` numbers from 1. */
const numbers = (count: number) => `(SELECT seq AS n FROM seq_1_to_${count}) numbers`;

/**
 * So many cars `QTKX 1` and on, of one owner, at the sites in turn: of ten, six on hand (one of
 * them past its limit), three en route (one of them quiet), one never read. Many share an instant.
 */
export async function buildBulkFleet(
  db: Database,
  { count, owner, sites, now }: { count: number; owner: Organisation; sites: Site[]; now: Date },
): Promise<void> {
  const siteIds = sites.map((site) => site.id).join(',');
  await db.pool.query(
    `INSERT INTO units (unit_key, kind, registered, owner_id)
     SELECT CONCAT('QTKX', n), 'car', 1, ? FROM ${numbers(count)}`,
    [owner.id],
  );
  await db.pool.query(
    `INSERT INTO identities (unit_id, compact, scheme, mark, number, display)
     SELECT u.id, u.unit_key, 'aar', 'QTKX', n, CONCAT('QTKX ', n)
     FROM ${numbers(count)} JOIN units u ON u.unit_key = CONCAT('QTKX', n)`,
  );
  await db.pool.query(
    `INSERT INTO last_seen (unit_id, at, state, site_id, direction, basis, stay_site_id,
       stay_first_seen_at, arrived_at, quiet_at, limit_at)
     SELECT id, at, state, site_id, 'unknown', 'read', IF(state = 'onHand', site_id, NULL),
       IF(state = 'onHand', at, NULL), IF(state = 'onHand', at, NULL),
       IF(state = 'enRoute', at + INTERVAL 72 HOUR, '9999-12-31'),
       IF(state = 'onHand', at + INTERVAL 96 HOUR, '9999-12-31')
     FROM (
       SELECT u.id, IF(n % 10 = 9, '1970-01-01', ? - INTERVAL (n DIV 7 * 31 % 90) HOUR
           - INTERVAL IF(n % 10 IN (5, 8), 100, 0) HOUR) AS at,
         IF(n % 10 < 6, 'onHand', IF(n % 10 < 9, 'enRoute', 'unseen')) AS state,
         IF(n % 10 = 9, NULL, ELT(1 + n % ?, ${siteIds})) AS site_id
       FROM ${numbers(count)} JOIN units u ON u.unit_key = CONCAT('QTKX', n)
     ) placed`,
    [now, sites.length],
  );
  await db.pool.query(
    `INSERT INTO visible_units (org_id, unit_id, at, state, site_id, quiet_at, limit_at)
     SELECT u.owner_id, l.unit_id, l.at, l.state, COALESCE(l.site_id, 0), l.quiet_at, l.limit_at
     FROM last_seen l JOIN units u ON u.id = l.unit_id WHERE u.owner_id = ?`,
    [owner.id],
  );
  await db.pool.query('ANALYZE TABLE units, identities, last_seen, visible_units');
}
