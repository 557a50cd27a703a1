import type { Pool, PoolConnection } from 'mariadb';
import type { EquipmentKind } from '../domain/identifiers/equipment-groups.js';
import {
  Network,
  type AntennaConfiguration,
  type Configuration,
  type Naming,
  type Place,
  type SiteConfiguration,
  type SiteLead,
} from '../domain/movements/configuration.js';
import type { RouteEdge, RouteNode } from '../domain/routes/route-graph.js';
import { TEXT_RANK } from '../domain/movements/passages.js';

/** The network of one configuration version, with what the register does not know of strangers. */
export interface LoadedNetwork {
  version: number;
  network: Network;
  /** Group code a stranger's kind was taken from (99: from a text), by unit id. */
  strangerRanks: Map<number, number>;
}

/** Version of the configuration now in force. */
export async function configurationVersion(pool: Pick<Pool, 'query'>): Promise<number> {
  const rows = await pool.query<{ version: number }[]>('SELECT version FROM config_state');
  return rows[0]?.version ?? 0;
}

/** The configuration has moved on since it was loaded: load it and begin again. */
export class ConfigurationChanged extends Error {
  constructor() {
    super('the configuration has changed');
    this.name = 'ConfigurationChanged';
  }
}

/**
 * Keeps the configuration as it is until the caller's transaction ends. Throws ConfigurationChanged
 * when it is not the one of `version` any more: who changes it plans, in the same transaction, what
 * is to be folded again, and that must not be folded as it was before.
 */
export async function holdConfiguration(
  connection: PoolConnection,
  version: number,
): Promise<void> {
  const [row] = await connection.query<{ version: number }[]>(
    'SELECT version FROM config_state WHERE id = 1 LOCK IN SHARE MODE',
  );
  if ((row?.version ?? 0) !== version) throw new ConfigurationChanged();
}

/** Reads the whole configuration: every unit, tag and identity, so not for each request. */
export async function loadNetwork(pool: Pick<Pool, 'query'>): Promise<LoadedNetwork> {
  const version = await configurationVersion(pool);
  const units = await pool.query<UnitRow[]>('SELECT id, kind, registered, group_code FROM units');
  const strangerRanks = new Map<number, number>();
  for (const unit of units) {
    if (!unit.registered) strangerRanks.set(unit.id, unit.group_code ?? TEXT_RANK);
  }
  const network = new Network(await loadConfiguration(pool, units));
  return { version, network, strangerRanks };
}

/** The configuration as the domain takes it. */
async function loadConfiguration(
  pool: Pick<Pool, 'query'>,
  units: readonly UnitRow[],
): Promise<Configuration> {
  const nodes = await pool.query<(RouteNode & { code: string })[]>(
    'SELECT id, code, site_id AS siteId FROM route_nodes',
  );
  const nodeIds = new Map(nodes.map(({ code, id }) => [code, id]));
  return {
    sites: (
      await pool.query<SiteRow[]>(
        `SELECT id, code, kind, return_hours AS returnHours, dwell_limit_hours AS dwellLimitHours,
           leads
         FROM sites`,
      )
    ).map((row) => ({ ...row, leads: JSON.parse(row.leads) as SiteLead[] })),
    readPoints: (await pool.query<ReadPointRow[]>('SELECT * FROM read_points')).map((row) => ({
      id: row.id,
      siteId: row.site_id,
      code: row.code,
      kind: row.kind,
      track: row.track,
      decreasingPlace: placeOf(row.decreasing_site_id, row.decreasing_track),
      increasingPlace: placeOf(row.increasing_site_id, row.increasing_track),
      passGapSeconds: row.pass_gap_seconds,
      visitGapSeconds: row.visit_gap_seconds,
      drillMinutes: row.drill_minutes,
      ...nodesToward(row.toward, nodeIds),
    })),
    antennas: await pool.query<AntennaConfiguration[]>(
      `SELECT site_id AS siteId, number, read_point_id AS readPointId, offset_m AS offsetM, side
       FROM antennas`,
    ),
    units: units.map((row) => ({
      unit: row.id,
      kind: row.kind,
      registered: Boolean(row.registered),
    })),
    tags: namings(
      await pool.query('SELECT value, unit_id, valid_from, valid_to FROM tags ORDER BY id'),
    ),
    identities: namings(
      await pool.query(
        'SELECT compact AS value, unit_id, valid_from, valid_to FROM identities ORDER BY id',
      ),
    ),
    routeNodes: nodes.map(({ id, siteId }) => ({ id, siteId })),
    routeEdges: await pool.query<RouteEdge[]>(
      `SELECT from_node_id AS \`from\`, to_node_id AS \`to\`, rail_metres AS metres, kind
       FROM route_edges`,
    ),
  };
}

interface UnitRow {
  id: number;
  kind: EquipmentKind;
  registered: number;
  group_code: number | null;
}

type SiteRow = Omit<SiteConfiguration, 'leads'> & { leads: string };

interface ReadPointRow {
  id: number;
  site_id: number;
  code: string;
  kind: 'line' | 'spot';
  track: string | null;
  decreasing_site_id: number | null;
  decreasing_track: string | null;
  increasing_site_id: number | null;
  increasing_track: string | null;
  pass_gap_seconds: number;
  visit_gap_seconds: number;
  drill_minutes: number;
  toward: string;
}

interface NamingRow {
  value: string | Buffer;
  unit_id: number;
  valid_from: Date | null;
  valid_to: Date | null;
}

/** Codes of nodes that are off the graph are left out. */
function nodesToward(toward: string, nodeIds: Map<string, number>) {
  const { decreasing = [], increasing = [] } = JSON.parse(toward) as Partial<
    Record<'decreasing' | 'increasing', string[]>
  >;
  const known = (codes: readonly string[]) => codes.flatMap((code) => nodeIds.get(code) ?? []);
  return { decreasingNodes: known(decreasing), increasingNodes: known(increasing) };
}

function placeOf(siteId: number | null, track: string | null): Place {
  return siteId === null ? null : { siteId, track };
}

function namings(rows: readonly NamingRow[]): Naming[] {
  return rows.map((row) => ({
    value: String(row.value),
    unit: row.unit_id,
    validFrom: row.valid_from?.getTime() ?? null,
    validTo: row.valid_to?.getTime() ?? null,
  }));
}
