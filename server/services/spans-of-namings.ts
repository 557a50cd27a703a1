import { resolveTag } from '../domain/identifiers/resolve-tag.js';
import { unpackEvidence } from '../domain/movements/pack-evidence.js';
import { byKeys } from '../lib/bulk.js';
import type { Runs } from '../lib/connection-of.js';
import { FAR } from '../lib/sentinels.js';
import { begin, end } from '../lib/validity.js';
import { loadHolders, type Holders } from './load-holders.js';
import type { NamingChange } from './naming-change.js';
import type { RebuildSpan } from './plan-rebuild.js';
import { padded } from './spans-of-changes.js';

interface PassageRow {
  read_point_id: number;
  unit_id: number;
  first_at: Date;
  last_at: Date;
  evidence: string;
}

/**
 * Where a tag or number names another unit than before: around the passages whose reads carry it
 * and belong to somebody else now, and around reads that were set aside because it named nobody.
 * Call it after the change, in its transaction.
 */
export async function spansOfNamings(
  connection: Runs,
  changes: readonly NamingChange[],
): Promise<RebuildSpan[]> {
  if (changes.length === 0) return [];
  const tags = changes.filter(({ kind }) => kind === 'tag').map(({ value }) => value);
  const numbers = changes.filter(({ kind }) => kind === 'identity').map(({ value }) => value);
  const holders = await loadHolders(connection, tags, [...numbers, ...tags.flatMap(numbersOf)]);
  const passages = await passagesOf(connection, changes, holders);
  const asked = new Set([...tags, ...numbers]);
  const carried = passages.map((row) => ({ row, reads: readsOf(row, asked) }));
  await holders.learnTags(
    connection,
    carried.flatMap(({ reads }) => reads.map(({ tag }) => tag)),
  );
  const moved = carried.filter(({ row, reads }) =>
    reads.some(({ tag, at }) => holders.holderOf(tag, at) !== row.unit_id),
  );
  return [
    ...moved.map(({ row }) =>
      padded({ readPointId: row.read_point_id, since: row.first_at, until: row.last_at }),
    ),
    ...(await spansOfHeld(connection, changes)),
  ];
}

/** Passages, during the changes, of all units that they could take reads from. */
async function passagesOf(
  connection: Runs,
  changes: readonly NamingChange[],
  holders: Holders,
): Promise<PassageRow[]> {
  const keys = changes.flatMap((change) => {
    const units = new Set([...change.unitIds, ...holders.everHolding(change.value)]);
    const [only] = units;
    if (units.size === 1 && only && holders.namesAlways(change, only)) return [];
    return [...units].map((unitId) => [
      unitId,
      dateOf(end(change), FAR),
      dateOf(begin(change), new Date(0)),
    ]);
  });
  const rows = await byKeys<PassageRow>(
    connection,
    'SELECT read_point_id, unit_id, first_at, last_at, evidence FROM passages WHERE :keys',
    'unit_id = ? AND first_at < ? AND last_at >= ?',
    keys,
  );
  const once = new Map(
    rows.map((row) => [`${row.read_point_id} ${row.unit_id} ${row.first_at.getTime()}`, row]),
  );
  return [...once.values()];
}

/** Reads of a passage whose tag, or the number on it, is one of those asked for. */
function readsOf({ evidence }: PassageRow, asked: Set<string>): { tag: string; at: number }[] {
  const reads = unpackEvidence(evidence).flatMap((visit) =>
    visit.groups
      ? visit.groups.flatMap(({ tag, firstAt, lastAt }) => [
          { tag, at: firstAt },
          { tag, at: lastAt },
        ])
      : visit.reads,
  );
  return reads.filter(({ tag }) => asked.has(tag) || numbersOf(tag).some((it) => asked.has(it)));
}

/** The number that a tag carries itself; an EPC carries none. */
function numbersOf(tag: string): string[] {
  const resolved = resolveTag(tag);
  return 'identity' in resolved ? [resolved.identity.compact] : [];
}

async function spansOfHeld(
  connection: Runs,
  changes: readonly NamingChange[],
): Promise<RebuildSpan[]> {
  const rows = await byKeys<{ read_point_id: number; read_at: Date }>(
    connection,
    `SELECT a.read_point_id, h.read_at FROM held h
       JOIN \`reads\` r ON r.batch_id = h.batch_id AND r.seq = h.seq AND r.read_at = h.read_at
       JOIN antennas a ON a.site_id = r.site_id AND a.number = r.antenna_no
     WHERE h.code = 'unmapped-epc' AND (:keys)`,
    'h.tag = ? AND h.read_at < ? AND h.read_at >= ?',
    changes
      .filter(({ kind }) => kind === 'tag')
      .map((change) => [
        Buffer.from(change.value),
        dateOf(end(change), FAR),
        dateOf(begin(change), new Date(0)),
      ]),
  );
  return rows.map(({ read_point_id: readPointId, read_at: at }) =>
    padded({ readPointId, since: at, until: at }),
  );
}

const dateOf = (ms: number, unbounded: Date): Date =>
  Number.isFinite(ms) ? new Date(ms) : unbounded;
