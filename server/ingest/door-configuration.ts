import type { Pool, PoolConnection } from 'mariadb';

/** The part of the configuration that decides about reads at the door, at one version of it. */
export interface DoorConfiguration {
  version: number;
  /** Before it the ledger is closed for good; 0 when no month has gone yet. */
  frozenBeforeMs: number;
  /** Antenna numbers by site id. */
  antennas: Map<number, Set<number>>;
  /** Those that were asked for so far. */
  epcs: EpcValidities;
}

/** Spans in which each EPC was registered; none: []. */
export type EpcValidities = Map<string, Validity[]>;

/** Milliseconds; `to` is the first instant that is out. */
interface Validity {
  from: number;
  to: number;
}

const kept = new WeakMap<Pool, DoorConfiguration>();

/**
 * The configuration as it stands for this transaction: the one kept for this pool, unless its
 * version has moved on.
 */
export async function doorConfiguration(
  pool: Pool,
  connection: PoolConnection,
): Promise<DoorConfiguration> {
  const [state] = await connection.query<{ version: number; frozen_before: Date | null }[]>(
    'SELECT version, frozen_before FROM config_state WHERE id = 1',
  );
  const version = state?.version ?? 0;
  const present = kept.get(pool);
  if (present?.version === version) return present;
  const fresh = {
    version,
    frozenBeforeMs: state?.frozen_before?.getTime() ?? 0,
    antennas: await loadAntennas(connection),
    epcs: new Map(),
  };
  kept.set(pool, fresh);
  return fresh;
}

async function loadAntennas(connection: PoolConnection): Promise<Map<number, Set<number>>> {
  const rows = await connection.query<{ site_id: number; number: number }[]>(
    'SELECT site_id, number FROM antennas',
  );
  const antennas = new Map<number, Set<number>>();
  for (const { site_id: siteId, number } of rows) {
    const numbers = antennas.get(siteId) ?? new Set<number>();
    antennas.set(siteId, numbers.add(number));
  }
  return antennas;
}

const MOST_EPCS = 50_000;

/** When each of these EPCs was registered, with one query for those not asked for before. */
export async function validitiesOf(
  door: DoorConfiguration,
  connection: PoolConnection,
  values: string[],
): Promise<EpcValidities> {
  const wanted = new Map(values.map((value) => [value, door.epcs.get(value)]));
  const unknown = [...wanted].filter(([, known]) => !known).map(([value]) => value);
  const loaded = await loadEpcs(connection, unknown);
  // Made-up EPCs must not fill the memory.
  if (door.epcs.size + loaded.size > MOST_EPCS) door.epcs.clear();
  for (const [value, validities] of loaded) door.epcs.set(value, validities);
  return new Map([...wanted].map(([value, known]) => [value, known ?? loaded.get(value) ?? []]));
}

async function loadEpcs(connection: PoolConnection, values: string[]): Promise<EpcValidities> {
  const validities: EpcValidities = new Map(values.map((value) => [value, []]));
  if (values.length === 0) return validities;
  const rows = await connection.query<
    { value: Buffer; valid_from: Date | null; valid_to: Date | null }[]
  >(
    `SELECT value, valid_from, valid_to FROM tags WHERE value IN (${values.map(() => '?').join()})`,
    values,
  );
  for (const row of rows) {
    validities.get(row.value.toString())?.push({
      from: row.valid_from?.getTime() ?? -Infinity,
      to: row.valid_to?.getTime() ?? Infinity,
    });
  }
  return validities;
}
