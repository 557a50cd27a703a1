import type { RawReadView, SightingView } from '../contract/movements.js';
import { passIdOf } from './pass-id.js';

type Side = 'left' | 'right';

/** A passage as the presenters take it; `runs` are its reads by antenna and tag. */
export interface PassageRecord {
  site_id: number;
  site_code: string;
  site_name: string;
  read_point_code: string;
  read_point_name: string;
  read_point_track: string | null;
  first_at: Date;
  last_at: Date;
  /** Null: a stray, which is in no pass. */
  pass_started_at: Date | null;
  pass_ordinal: number | null;
  stray: string | null;
  doubted: number;
  direction: string;
  direction_basis: string | null;
  role: string;
  speed_kmh: number | null;
  read_count: number;
}

export interface RunRecord {
  antenna: number;
  tag: string;
  count: number;
}

/** What the register knows about where antennas and tags are. */
export interface Sides {
  ofAntenna: (siteId: number, number: number) => Side | null;
  ofTag: (rawTag: string) => Side | null;
}

const ROLES = ['crossing', 'returned', 'presence', 'stray'] as const;

/** All passages of a unit in one pass, or strays that go together (at least one), as one sighting. */
export function presentSighting(
  passages: readonly [PassageRecord, ...PassageRecord[]],
  runs: readonly RunRecord[],
  sides: Sides,
): SightingView {
  const [first] = passages;
  const directed = passages.find((passage) => passage.direction !== 'unknown') ?? first;
  const times = passages.map((passage) => passage.last_at.getTime());
  return {
    passId: passOf(first),
    ...placeOf(first),
    track: first.read_point_track,
    startedAt: first.first_at.toISOString(),
    endedAt: new Date(Math.max(...times)).toISOString(),
    direction: directed.direction as SightingView['direction'],
    directionBasis: directed.direction_basis as SightingView['directionBasis'],
    basis: 'read',
    role: ROLES.find((role) => passages.some((passage) => passage.role === role)) ?? 'presence',
    stray: first.stray as SightingView['stray'],
    doubted: passages.some((passage) => passage.doubted === 1),
    speedKmh: directed.speed_kmh,
    antennas: antennasOf(first.site_id, runs, sides),
    sides: (['left', 'right'] as const).filter((side) =>
      runs.some((run) => sides.ofTag(run.tag) === side),
    ),
    passages: passages.length,
    reads: passages.reduce((sum, passage) => sum + passage.read_count, 0),
  };
}

/** What `presentRead` takes: a row of the ledger with the passage that it made. */
export interface RawReadRecord {
  antenna_no: number;
  tag: Buffer;
  read_at: Date;
  rssi: number | null;
  read_count: number | null;
  received_at: Date;
  passage: PassageRecord;
}

/** A read as it came, with the pass it belongs to. */
export function presentRead(row: RawReadRecord, sides: Sides): RawReadView {
  const tag = row.tag.toString('utf8');
  return {
    tag,
    tagSide: sides.ofTag(tag),
    ...placeOf(row.passage),
    antenna: row.antenna_no,
    antennaSide: sides.ofAntenna(row.passage.site_id, row.antenna_no),
    readAt: row.read_at.toISOString(),
    rssi: row.rssi,
    count: row.read_count,
    receivedAt: row.received_at.toISOString(),
    passId: passOf(row.passage),
  };
}

function antennasOf(
  siteId: number,
  runs: readonly RunRecord[],
  sides: Sides,
): SightingView['antennas'] {
  const reads = new Map<number, number>();
  for (const run of runs) reads.set(run.antenna, (reads.get(run.antenna) ?? 0) + run.count);
  return [...reads]
    .sort(([a], [b]) => a - b)
    .map(([number, count]) => ({ number, side: sides.ofAntenna(siteId, number), reads: count }));
}

function placeOf(passage: PassageRecord) {
  return {
    site: { code: passage.site_code, name: passage.site_name },
    readPoint: { code: passage.read_point_code, name: passage.read_point_name },
  };
}

function passOf(passage: PassageRecord): string | null {
  if (!passage.pass_started_at) return null;
  return passIdOf({
    siteCode: passage.site_code,
    readPointCode: passage.read_point_code,
    startedAt: passage.pass_started_at,
    ordinal: passage.pass_ordinal ?? 0,
  });
}
