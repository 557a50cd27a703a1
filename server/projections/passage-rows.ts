import type { UnitRef } from '../domain/movements/configuration.js';
import { packEvidence, unpackEvidence } from '../domain/movements/pack-evidence.js';
import type { PassMember, Pass } from '../domain/movements/passes.js';
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
  'speed_kmh',
  'read_count',
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
  pass_started_at: Date;
  pass_ordinal: number;
  direction: string;
  direction_basis: string | null;
  role: string;
  speed_kmh: number | null;
  read_count: number;
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

export function passageValues(readPointId: number, pass: Pass, member: PassMember): SqlValue[] {
  const { passage } = member;
  return [
    readPointId,
    new Date(passage.first.at),
    passage.unit,
    passage.first.antenna,
    Buffer.from(passage.first.tag),
    new Date(passage.lastAt),
    new Date(pass.startedAt),
    pass.ordinal,
    member.direction ?? 'unknown',
    member.basis,
    member.role,
    passage.own.speedKmh,
    passage.readCount,
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
