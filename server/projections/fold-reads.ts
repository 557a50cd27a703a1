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
import { byKeys, insertRows } from '../lib/bulk.js';
import type { Database } from '../lib/database.js';
import { withTransaction } from '../lib/database.js';
import { Changes } from './changes.js';
import { factsByPoint } from './facts-by-point.js';
import { foldPoints } from './fold-points.js';
import type { LoadedNetwork } from './load-network.js';
import type { Work } from './take-work.js';

/** A read with the unit that it names. */
export type Usable = ResolvedRead & { unit: number; read: UsableRead };

/** First stage: folds reads and wheel records into passages and passes. Answers what changed. */
export async function foldReads(
  connection: PoolConnection,
  { network, strangerRanks }: LoadedNetwork,
  wheels: Work['wheels'],
  usable: readonly Usable[],
): Promise<Changes> {
  const changes = new Changes();
  await lowerRanks(connection, strangerRanks, usable, changes);
  await foldPoints(connection, network, factsByPoint(network, wheels, usable), changes);
  return changes;
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
  learn(network, strangerRanks, made);
  return resolved.flatMap(({ read, named }) => {
    const unit = named.unit ?? made.get(named.identity?.compact ?? '')?.unit;
    if (typeof unit !== 'number') return [];
    return [{ ...named, unit, read: { at: read.at, antenna: read.antenna, tag: read.tag } }];
  });
}

/** The units that reports are about, made where nobody knew of them, with the instants (ms). */
export async function resolveReports(
  db: Database,
  { network, strangerRanks }: LoadedNetwork,
  reports: Work['reports'],
): Promise<{ unitId: number; at: number }[]> {
  const strangers = new Map<string, { identity: Identity; tag: string }>();
  for (const { compact, at } of reports) {
    if (network.unitOfIdentity(compact, at) !== undefined) continue;
    const resolved = resolveTag(compact);
    if (resolved.kind === 'text') strangers.set(compact, { ...resolved, tag: compact });
  }
  const made = await makeStrangers(db, [...strangers.values()]);
  learn(network, strangerRanks, made);
  return reports.flatMap(({ compact, at }) => {
    const unitId = network.unitOfIdentity(compact, at);
    return typeof unitId === 'number' ? [{ unitId, at }] : [];
  });
}

function learn(
  network: LoadedNetwork['network'],
  strangerRanks: Map<number, number>,
  made: ReadonlyMap<string, Stranger>,
): void {
  for (const [compact, { unit, rank }] of made) {
    network.learn({ value: compact, unit, validFrom: null, validTo: null });
    if (rank !== null) strangerRanks.set(unit, rank);
  }
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
  changes: Changes,
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
    changes.unit(unit, 0);
  }
}
