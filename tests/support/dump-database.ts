import { canonicalDump } from '../../server/domain/movements/canonical-dump.js';
import { Network, type Configuration } from '../../server/domain/movements/configuration.js';
import type { Doubt } from '../../server/domain/movements/doubt.js';
import type { Bounds, Leg, Stay } from '../../server/domain/movements/fold-state.js';
import type { LastSeen } from '../../server/domain/movements/last-seen.js';
import type { Database } from '../../server/lib/database.js';
import { FAR } from '../../server/lib/sentinels.js';
import type { PassageRow, PassRow } from '../../server/projections/passage-rows.js';

type Row = Record<string, never>;

/** The canonical dump of the history that the tables hold, units named by their keys. */
export async function dumpDatabase(db: Database, configuration: Configuration): Promise<string[]> {
  const select = <T>(table: string) => db.pool.query<T[]>(`SELECT * FROM ${table}`);
  const units = await select<{ id: number; unit_key: string }>('units');
  const keys = new Map(units.map((unit) => [unit.id, unit.unit_key]));
  return canonicalDump(
    new Network(configuration),
    {
      passages: (await select<PassageRow>('passages')).map((row) => ({
        readPointId: row.read_point_id,
        passStartedAt: row.pass_started_at?.getTime() ?? null,
        passOrdinal: row.pass_ordinal,
        unit: row.unit_id,
        firstAt: row.first_at.getTime(),
        lastAt: row.last_at.getTime(),
        readCount: row.read_count,
        role: row.role,
        stray: row.stray,
        tagCount: row.tag_count,
        direction: known(row.direction),
        basis: row.direction_basis,
        speedKmh: row.speed_kmh,
      })),
      passes: (await select<PassRow>('passes')).map((row) => ({
        readPointId: row.read_point_id,
        startedAt: row.started_at.getTime(),
        ordinal: row.ordinal,
        endedAt: row.ended_at.getTime(),
        direction: known(row.direction),
        basis: row.direction_basis,
        speedKmh: row.speed_kmh,
        reversal: Boolean(row.reversal),
        size: row.unit_count,
      })),
      stays: (await select<Row>('stays')).map((row) => ({ unit: row['unit_id']!, ...stayOf(row) })),
      legs: (await select<Row>('legs')).map((row) => ({ unit: row['unit_id']!, ...legOf(row) })),
      lastSeen: (await select<Row>('last_seen'))
        .filter((row) => row['state'] !== 'unseen')
        .map((row) => ({ unit: row['unit_id']!, ...lastSeenOf(row) })),
      doubts: (await select<Row>('doubts')).map((row) => ({
        unit: row['unit_id']!,
        ...doubtOf(row),
      })),
    },
    (unit) => keys.get(unit as number) as string,
  );
}

function stayOf(row: Row): Stay {
  return {
    siteId: row['site_id']!,
    firstSeenAt: ms(row, 'first_seen_at') as number,
    lastSeenAt: ms(row, 'last_seen_at') as number,
    track: row['track']!,
    arrivedAt: ms(row, 'arrived_at'),
    arrivalBasis: row['arrival_basis']!,
    arrivalBounds: bounds(row, 'arrival'),
    arrivalFinalAt: ms(row, 'arrival_final_at'),
    departedAt: ms(row, 'departed_at'),
    departureBasis: row['departure_basis']!,
    departureBounds: bounds(row, 'departure'),
    departureFinalAt: ms(row, 'departure_final_at'),
    excursions: row['excursions']!,
    outOfDwell: Boolean(row['out_of_dwell']),
    openedByPresence: false,
  };
}

function legOf(row: Row): Leg {
  return {
    fromSiteId: row['from_site_id']!,
    fromFirstSeenAt: ms(row, 'from_first_seen_at') as number,
    toSiteId: row['to_site_id']!,
    toFirstSeenAt: ms(row, 'to_first_seen_at') as number,
    departedAt: ms(row, 'departed_at') as number,
    arrivedAt: ms(row, 'arrived_at'),
    railMetres: row['rail_metres']!,
    estimated: Boolean(row['estimated']),
  };
}

function lastSeenOf(row: Row): LastSeen {
  return {
    at: ms(row, 'at') as number,
    state: row['state']!,
    siteId: row['site_id']!,
    track: row['track']!,
    readPointId: row['read_point_id']!,
    pass: passOf(row),
    basis: row['basis']!,
    direction: known(row['direction']!) as LastSeen['direction'],
    staySiteId: row['stay_site_id']!,
    stayFirstSeenAt: ms(row, 'stay_first_seen_at'),
    arrivedAt: ms(row, 'arrived_at'),
    quietAt: limit(row, 'quiet_at'),
    limitAt: limit(row, 'limit_at'),
  };
}

function passOf(row: Row): LastSeen['pass'] {
  const startedAt = ms(row, 'pass_started_at');
  if (startedAt === null) return null;
  return { readPointId: row['read_point_id']!, startedAt, ordinal: row['pass_ordinal']! };
}

function doubtOf(row: Row): Doubt {
  return {
    at: ms(row, 'at') as number,
    readPointId: row['read_point_id']!,
    previousReadPointId: row['previous_read_point_id']!,
    previousAt: ms(row, 'previous_at') as number,
    railMetres: row['rail_metres']!,
    corroboratedBy: row['corroborated_by']!,
  };
}

function known(direction: string): string | null {
  return direction === 'unknown' ? null : direction;
}

function ms(row: Row, column: string): number | null {
  const value = row[column] as unknown as Date | null;
  return value?.getTime() ?? null;
}

function limit(row: Row, column: string): number | null {
  const at = ms(row, column);
  return at === FAR.getTime() ? null : at;
}

function bounds(row: Row, which: 'arrival' | 'departure'): Bounds | null {
  const latest = ms(row, `${which}_latest`);
  return latest === null ? null : { earliest: ms(row, `${which}_earliest`), latest };
}
