import type { UnitRef } from '../domain/movements/configuration.js';
import { packEvidence, unpackEvidence } from '../domain/movements/pack-evidence.js';
import type { Passage } from '../domain/movements/passages.js';
import type { Pass, PassMember } from '../domain/movements/passes.js';
import type { StrayPassage } from '../domain/movements/refold-point.js';
import type { StrayReason } from '../domain/movements/strays.js';
import type { Visit } from '../domain/movements/visits.js';
import type { SqlValue } from '../lib/bulk.js';

/** Columns of `passages` in the order `passageValues` gives them. */
export const PASSAGE_COLUMNS = [
  'read_point_id',
  'first_at',
  'unit_id',
  'first_antenna',
  'first_tag',
  'last_at',
  'pass_started_at',
  'pass_ordinal',
  'direction',
  'direction_basis',
  'role',
  'stray',
  'speed_kmh',
  'read_count',
  'tag_count',
  'evidence',
] as const;

/** A row of `passages` as the connector gives it. */
export interface PassageRow {
  read_point_id: number;
  first_at: Date;
  unit_id: number;
  first_antenna: number;
  first_tag: Buffer;
  last_at: Date;
  /** Null: a stray, which is in no pass. */
  pass_started_at: Date | null;
  pass_ordinal: number | null;
  direction: string;
  direction_basis: string | null;
  role: string;
  stray: StrayReason | null;
  speed_kmh: number | null;
  read_count: number;
  tag_count: number;
  evidence: string;
}

/** Columns of `passes` in the order `passValues` gives them. */
export const PASS_COLUMNS = [
  'read_point_id',
  'started_at',
  'ordinal',
  'ended_at',
  'direction',
  'direction_basis',
  'speed_kmh',
  'unit_count',
  'reversal',
  'clean_start',
] as const;

/** A row of `passes` as the connector gives it. */
export interface PassRow {
  read_point_id: number;
  started_at: Date;
  ordinal: number;
  ended_at: Date;
  direction: string;
  direction_basis: string | null;
  speed_kmh: number | null;
  unit_count: number;
  reversal: number;
  clean_start: number;
}

export function passageValues(
  readPointId: number,
  { startedAt, ordinal }: Pick<Pass, 'startedAt' | 'ordinal'>,
  { passage, direction, basis, role }: PassMember,
): SqlValue[] {
  const place = [new Date(startedAt), ordinal, direction ?? 'unknown', basis, role, null];
  return rowValues(readPointId, passage, place);
}

export function strayValues(readPointId: number, { passage, reason }: StrayPassage): SqlValue[] {
  return rowValues(readPointId, passage, [null, null, 'unknown', null, 'stray', reason]);
}

function rowValues(readPointId: number, passage: Passage, place: readonly SqlValue[]): SqlValue[] {
  return [
    readPointId,
    new Date(passage.first.at),
    passage.unit,
    passage.first.antenna,
    Buffer.from(passage.first.tag),
    new Date(passage.lastAt),
    ...place,
    passage.own.speedKmh,
    passage.readCount,
    passage.tagCount,
    packEvidence(passage.visits),
  ];
}

export function passValues(readPointId: number, pass: Pass): SqlValue[] {
  return [
    readPointId,
    new Date(pass.startedAt),
    pass.ordinal,
    new Date(pass.endedAt),
    pass.direction ?? 'unknown',
    pass.basis,
    pass.speedKmh,
    pass.members.length,
    pass.reversal,
    pass.cleanStart,
  ];
}

/** The visits a stored passage was made of. */
export function visitsOfRow(row: PassageRow): Visit[] {
  const unit: UnitRef = row.unit_id;
  return unpackEvidence(row.evidence).map((evidence) => ({ unit, evidence }));
}
