import type { Configuration } from '../../server/domain/movements/configuration.js';
import { resolveTag } from '../../server/domain/identifiers/resolve-tag.js';
import { insertRows, type SqlValue } from '../../server/lib/bulk.js';
import { withTransaction, type Database } from '../../server/lib/database.js';

/**
 * Writes a configuration of the domain into the tables, its ids as row ids. Units get row ids of
 * their own and keep their reference as key.
 */
export async function storeConfiguration(db: Database, network: Configuration): Promise<void> {
  await withTransaction(db.pool, async (connection) => {
    const insert = (table: string, rows: Record<string, SqlValue>[]) =>
      insertRows(connection, table, Object.keys(rows[0] ?? {}), rows.map(Object.values));
    await insert(
      'sites',
      network.sites.map((site) => ({
        id: site.id,
        code: site.code,
        name: site.code,
        kind: site.kind,
        latitude: 45,
        longitude: -93,
        time_zone: 'America/Chicago',
        return_hours: site.returnHours,
        dwell_limit_hours: site.dwellLimitHours,
        leads: JSON.stringify(site.leads),
      })),
    );
    await insert(
      'read_points',
      network.readPoints.map((point) => ({
        id: point.id,
        site_id: point.siteId,
        code: point.code,
        name: point.code,
        track: point.track,
        kind: point.kind,
        decreasing_site_id: point.decreasingPlace?.siteId ?? null,
        decreasing_track: point.decreasingPlace?.track ?? null,
        increasing_site_id: point.increasingPlace?.siteId ?? null,
        increasing_track: point.increasingPlace?.track ?? null,
        pass_gap_seconds: point.passGapSeconds,
        visit_gap_seconds: point.visitGapSeconds,
        drill_minutes: point.drillMinutes,
        toward: JSON.stringify({
          decreasing: point.decreasingNodes.map((id) => `N${id}`),
          increasing: point.increasingNodes.map((id) => `N${id}`),
        }),
      })),
    );
    await insert(
      'antennas',
      network.antennas.map((antenna) => ({
        site_id: antenna.siteId,
        read_point_id: antenna.readPointId,
        number: antenna.number,
        offset_m: antenna.offsetM,
        side: antenna.side,
      })),
    );
    await insert(
      'route_nodes',
      network.routeNodes.map(({ id, siteId }) => ({
        id,
        code: `N${id}`,
        name: `N${id}`,
        site_id: siteId,
        latitude: 45,
        longitude: -93,
      })),
    );
    await insert(
      'route_edges',
      network.routeEdges.map(({ from, to, metres, kind }, index) => ({
        from_node_id: from,
        to_node_id: to,
        line: `Line ${index}`,
        kind,
        rail_metres: metres,
      })),
    );
    await insert(
      'units',
      network.units.map(({ kind, registered, unit }, index) => ({
        id: index + 1,
        unit_key: String(unit),
        kind,
        registered,
      })),
    );
    const rowIds = new Map(network.units.map(({ unit }, index) => [unit, index + 1]));
    await insert(
      'identities',
      network.identities.map((naming) => {
        const resolved = resolveTag(naming.value);
        if (resolved.kind !== 'text') throw new Error(`${naming.value} is no identity`);
        const { scheme, mark, number, display } = resolved.identity;
        const unitId = rowIds.get(naming.unit) as number;
        return { unit_id: unitId, compact: naming.value, scheme, mark, number, display };
      }),
    );
    await connection.query('UPDATE config_state SET version = version + 1 WHERE id = 1');
  });
}
