import type { PoolConnection } from 'mariadb';
import type { Identity } from '../domain/identifiers/identity.js';
import { resolveTag } from '../domain/identifiers/resolve-tag.js';
import type { UsableRead } from '../domain/movements/evidence.js';
import { TEXT_RANK } from '../domain/movements/passages.js';
import {
  resolveRead,
  type LedgerRead,
  type ResolvedRead,
} from '../domain/movements/resolve-read.js';
import { visitsOf } from '../domain/movements/visits.js';
import { byKeys, insertRows } from '../lib/bulk.js';
import type { Database } from '../lib/database.js';
import { withTransaction } from '../lib/database.js';
import { foldPoint, markDirty, type DirtyUnits, type FreshFacts } from './fold-point.js';
import type { LoadedNetwork } from './load-network.js';
import type { Work } from './take-work.js';

type Usable = ResolvedRead & { unit: number; read: UsableRead };

/**
 * First stage: folds reads and wheel records into passages and passes, read point by read point.
 * Answers which units changed from when on.
 */
export async function foldReads(
  connection: PoolConnection,
  { network, strangerRanks }: LoadedNetwork,
  work: Work,
  usable: readonly Usable[],
): Promise<DirtyUnits> {
  const dirty: DirtyUnits = new Map();
  await lowerRanks(connection, strangerRanks, usable, dirty);
  const points = factsByPoint(network, work, usable);
  for (const [readPointId, facts] of [...points].sort(([a], [b]) => a - b)) {
    const point = network.readPoints.get(readPointId);
    if (point) await foldPoint(connection, network, point, facts, dirty);
  }
  return dirty;
}

/** Reads that name a unit under this configuration; strangers get their rows here. */
export async function resolveReads(
  db: Database,
  { network, strangerRanks }: LoadedNetwork,
  reads: readonly LedgerRead[],
): Promise<Usable[]> {
  const resolved = reads.flatMap((read) => {
    const named = resolveRead(network, read);
    return named ? [{ read, named }] : [];
  });
  const strangers = new Map<string, { identity: Identity; tag: string }>();
  for (const { read, named } of resolved) {
    if (named.unit !== null || !named.identity) continue;
    strangers.set(named.identity.compact, { identity: named.identity, tag: read.tag });
  }
  const made = await makeStrangers(db, [...strangers.values()]);
  for (const [compact, { unit, rank }] of made) {
    network.learn({ value: compact, unit, validFrom: null, validTo: null });
    if (rank !== null) strangerRanks.set(unit, rank);
  }
  return resolved.flatMap(({ read, named }) => {
    const unit = named.unit ?? made.get(named.identity?.compact ?? '')?.unit;
    if (typeof unit !== 'number') return [];
    return [{ ...named, unit, read: { at: read.at, antenna: read.antenna, tag: read.tag } }];
  });
}

type Stranger = { unit: number; rank: number | null };

async function makeStrangers(
  db: Database,
  strangers: readonly { identity: Identity; tag: string }[],
): Promise<Map<string, Stranger>> {
  const made = new Map<string, Stranger>();
  if (strangers.length === 0) return made;
  await withTransaction(db.pool, async (connection) => {
    const units = strangers.map(({ identity, tag }) => {
      const { kind, groupCode } = kindOfTag(tag);
      return [identity.compact, kind, groupCode];
    });
    await insertRows(connection, 'units', ['unit_key', 'kind', 'group_code'], units);
    const rows = await byKeys<UnitRow>(
      connection,
      `SELECT u.id, u.unit_key, u.registered, u.group_code,
         EXISTS (SELECT 1 FROM identities i WHERE i.unit_id = u.id) AS named
       FROM units u WHERE :keys`,
      'u.unit_key = ?',
      strangers.map(({ identity }) => [identity.compact]),
    );
    const byKey = new Map(strangers.map(({ identity }) => [identity.compact, identity]));
    const unnamed = rows.filter((row) => !row.named);
    await insertRows(
      connection,
      'identities',
      ['unit_id', 'compact', 'scheme', 'mark', 'number', 'display'],
      unnamed.map((row) => {
        const identity = byKey.get(row.unit_key) as Identity;
        const { compact, scheme, mark, number, display } = identity;
        return [row.id, compact, scheme, mark, number, display];
      }),
    );
    for (const row of rows) {
      const rank = row.registered ? null : (row.group_code ?? TEXT_RANK);
      made.set(row.unit_key, { unit: row.id, rank });
    }
  });
  return made;
}

interface UnitRow {
  id: number;
  unit_key: string;
  registered: number;
  group_code: number | null;
  named: number;
}

function kindOfTag(tag: string) {
  const resolved = resolveTag(tag);
  if (resolved.kind === 'aei') {
    return { kind: resolved.equipmentKind, groupCode: resolved.groupCode };
  }
  return { kind: resolved.kind === 'text' ? resolved.equipmentKind : 'other', groupCode: null };
}

/** A tag that says more of a stranger's kind than any before it changes its whole history. */
async function lowerRanks(
  connection: PoolConnection,
  ranks: Map<number, number>,
  usable: readonly Usable[],
  dirty: DirtyUnits,
): Promise<void> {
  for (const { unit, read } of usable) {
    const rank = ranks.get(unit);
    if (rank === undefined) continue;
    const { kind, groupCode } = kindOfTag(read.tag);
    if ((groupCode ?? TEXT_RANK) >= rank) continue;
    ranks.set(unit, groupCode ?? TEXT_RANK);
    await connection.query('UPDATE units SET kind = ?, group_code = ? WHERE id = ?', [
      kind,
      groupCode,
      unit,
    ]);
    markDirty(dirty, unit, 0);
  }
}

function factsByPoint(
  network: LoadedNetwork['network'],
  work: Work,
  usable: readonly Usable[],
): Map<number, FreshFacts> {
  const facts = new Map<number, FreshFacts>();
  const factsOf = (readPointId: number) => {
    const known = facts.get(readPointId) ?? { visits: [], since: Infinity, until: -Infinity };
    facts.set(readPointId, known);
    return known;
  };
  const reads = new Map<string, { point: number; unit: number; reads: UsableRead[] }>();
  for (const { readPointId, unit, read } of usable) {
    const known = factsOf(readPointId);
    known.since = Math.min(known.since, read.at);
    known.until = Math.max(known.until, read.at);
    const key = `${readPointId} ${unit}`;
    const own = reads.get(key) ?? { point: readPointId, unit, reads: [] };
    reads.set(key, own);
    own.reads.push(read);
  }
  for (const { point, unit, reads: own } of reads.values()) {
    const gapMs = network.readPoint(point).visitGapSeconds * 1000;
    for (const visit of visitsOf(unit, own, gapMs)) factsOf(point).visits.push(visit);
  }
  for (const { readPointId, since, until } of work.wheels) {
    const known = factsOf(readPointId);
    known.since = Math.min(known.since, since);
    known.until = Math.max(known.until, until);
  }
  return facts;
}
