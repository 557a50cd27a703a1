import type { Pool, PoolConnection } from 'mariadb';

/** The part of the configuration that decides about reads at the door, at one version of it. */
export interface DoorConfiguration {
  version: number;
  /** Antenna numbers by site id. */
  antennas: Map<number, Set<number>>;
  /** Validity of each registered EPC that was asked for so far, in milliseconds; none: []. */
  epcs: Map<string, Validity[]>;
}

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
  const [state] = await connection.query<{ version: number }[]>(
    'SELECT version FROM config_state WHERE id = 1',
  );
  const version = state?.version ?? 0;
  const present = kept.get(pool);
  if (present?.version === version) return present;
  const fresh = { version, antennas: await loadAntennas(connection), epcs: new Map() };
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

/** Makes `door.epcs` know each of these EPCs, with one query for those it does not know yet. */
export async function learnEpcs(
  door: DoorConfiguration,
  connection: PoolConnection,
  values: string[],
): Promise<void> {
  const unknown = [...new Set(values)].filter((value) => !door.epcs.has(value));
  if (unknown.length === 0) return;
  const rows = await connection.query<
    { value: Buffer; valid_from: Date | null; valid_to: Date | null }[]
  >(
    `SELECT value, valid_from, valid_to FROM tags WHERE value IN (${unknown.map(() => '?').join()})`,
    unknown,
  );
  for (const value of unknown) door.epcs.set(value, []);
  for (const row of rows) {
    door.epcs.get(row.value.toString())?.push({
      from: row.valid_from?.getTime() ?? -Infinity,
      to: row.valid_to?.getTime() ?? Infinity,
    });
  }
}
