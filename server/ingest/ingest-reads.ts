import type { PoolConnection } from 'mariadb';
import type { HoldCode, IngestAnswer } from '../contract/ingest.js';
import { withTransaction, type Database } from '../lib/database.js';
import { appendReads, type DoorRead } from './append-reads.js';
import { asUnavailable } from './as-unavailable.js';
import { doorConfiguration, validitiesOf } from './door-configuration.js';
import { doorClock, holdDetails, holdOf } from './hold-of.js';
import { judgeRead, type RejectedRead, type SoundRead } from './judge-read.js';

export interface IngestInput {
  site: { id: number; code: string };
  /** As they came over the wire: each is judged by itself. 5,000 at most. */
  reads: unknown[];
  receivedAt: Date;
  /** Months that raw reads are kept; 13 unless the settings say otherwise. */
  retainMonths?: number;
}

/**
 * Takes reads of one site in and answers for each of them, after the commit. Every well-formed
 * read is stored, once. Throws a 503 problem when the database is away; nothing is stored then,
 * or the answer was lost and sending again finds duplicates.
 */
export async function ingestReads(db: Database, input: IngestInput): Promise<IngestAnswer> {
  const judged = input.reads.map(judgeRead);
  const sound = judged.filter((read) => 'tag' in read);
  const rejected = sound.length < judged.length ? judged.filter((read) => 'code' in read) : [];
  if (sound.length === 0) return answer(input.reads.length, rejected, []);
  const stored = await asUnavailable(() =>
    withTransaction(db.pool, (connection) => append(db, connection, input, sound)),
  );
  return answer(input.reads.length, rejected, stored);
}

async function append(
  db: Database,
  connection: PoolConnection,
  { site, receivedAt, retainMonths = 13 }: IngestInput,
  sound: SoundRead[],
): Promise<DoorRead[]> {
  const door = await doorConfiguration(db.pool, connection);
  const epcs = sound.filter((read) => read.tag.kind === 'epc').map((read) => read.tag.value);
  const sight = {
    antennas: door.antennas.get(site.id) ?? new Set<number>(),
    epcs: await validitiesOf(door, connection, epcs),
    clock: doorClock(receivedAt, retainMonths, door.frozenBeforeMs),
  };
  return appendReads(connection, {
    siteId: site.id,
    receivedAt,
    configVersion: door.version,
    reads: sound.map((read) => ({ read, hold: holdOf(read, sight) })),
  });
}

function answer(total: number, rejected: RejectedRead[], stored: DoorRead[]): IngestAnswer {
  const held = stored.flatMap(({ read, hold }) => (hold ? [heldProblem(read.index, hold)] : []));
  return {
    accepted: stored.length - held.length,
    duplicates: total - rejected.length - stored.length,
    held: held.length,
    rejected: rejected.length,
    problems: [...rejected, ...held].sort((a, b) => a.index - b.index),
  };
}

function heldProblem(index: number, code: HoldCode) {
  return { index, code, detail: holdDetails[code] };
}
