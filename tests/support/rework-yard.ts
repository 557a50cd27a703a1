import { ingestReads } from '../../server/ingest/ingest-reads.js';
import type { Context } from '../../server/lib/context.js';
import type { ReadPoint } from '../../server/models/read-point.js';
import type { Site } from '../../server/models/site.js';
import { createProjector } from '../../server/projections/projector.js';
import { buildAntenna, buildReadPoint, buildSite } from './factories.js';
import { carTag } from './ingest.js';

/** The instant so many minutes after ten o'clock on 2 November 2026. */
export const minutes = (count: number) =>
  new Date(Date.parse('2026-11-02T10:00:00Z') + count * 60_000);

const minutesOf = (at: Date) => Math.round((at.getTime() - minutes(0).getTime()) / 60_000);

/** A rebuild that waits, as a person and as the projector see it. */
export interface Planned {
  label: string;
  /** Read point, and from and until in minutes. */
  spans: [string, number, number][];
}

/** Alder, with what was read there and ways to add to it. */
export interface ReworkYard {
  site: Site;
  east: ReadPoint;
  west: ReadPoint;
  send(reads: [antenna: number, tag: string, at: number][]): Promise<void>;
  drain(): Promise<void>;
}

/**
 * A yard with two tracks of one lead, East and West, and a gate to a mill. Antennas 1 and 2 have
 * read cars 1 and 2, at 0 and 120 minutes; 3 and 4 car 3 at 60; 5 and 6 car 4 at 240.
 */
export async function buildReworkYard(context: Context): Promise<ReworkYard> {
  const { db } = context;
  const site = await buildSite(db, { code: 'ALDER', name: 'Alder', timeZone: 'UTC' });
  const east = await buildReadPoint(db, { site, code: 'EAST', name: 'East', track: '1' });
  const west = await buildReadPoint(db, { site, code: 'WEST', name: 'West', track: '2' });
  const industry = await buildSite(db, { code: 'MILL', kind: 'industry' });
  const gate = await buildReadPoint(db, {
    site,
    code: 'GATE',
    name: 'Gate',
    decreasingSite: industry,
  });
  for (const [readPoint, number, offsetM] of [
    [east, 1, -3],
    [east, 2, 3],
    [west, 3, -3],
    [west, 4, 3],
    [gate, 5, 0],
    [gate, 6, 0],
  ] as const) {
    await buildAntenna(db, { readPoint, number, offsetM });
  }
  await db.pool.query('UPDATE config_state SET version = version + 1');
  const yard: ReworkYard = {
    site,
    east,
    west,
    async send(reads) {
      await ingestReads(db, {
        site: { id: site.id, code: site.code },
        reads: reads.map(([antenna, tag, at]) => ({
          antenna,
          tag,
          readAt: minutes(at).toISOString(),
        })),
        receivedAt: context.clock.now(),
      });
    },
    async drain() {
      const projector = createProjector(context);
      await projector.drain();
      await projector.stop();
    },
  };
  await yard.send([
    [1, carTag(1), 0],
    [2, carTag(1), 0.02],
    [1, carTag(2), 120],
    [2, carTag(2), 120.02],
    [3, carTag(3), 60],
    [4, carTag(3), 60.02],
    [5, carTag(4), 240],
    [6, carTag(4), 240],
  ]);
  await yard.drain();
  return yard;
}

/** The rebuilds that wait, oldest first, and the units that are to be folded again. */
export async function plannedRework({
  db,
}: Pick<Context, 'db'>): Promise<{ rebuilds: Planned[]; units: string[] }> {
  const rows = await db.pool.query<
    { id: number; label: string; code: string; since_at: Date; until_at: Date }[]
  >(
    `SELECT r.id, r.label, rp.code, s.since_at, s.until_at FROM rebuilds r
       JOIN rebuild_spans s ON s.rebuild_id = r.id JOIN read_points rp ON rp.id = s.read_point_id
     WHERE r.state = 'waiting' ORDER BY r.id, rp.code, s.since_at`,
  );
  const byId = new Map<number, Planned>();
  for (const { id, label, code, since_at: since, until_at: until } of rows) {
    const rebuild = byId.get(id) ?? { label, spans: [] };
    byId.set(id, rebuild);
    rebuild.spans.push([code, minutesOf(since), minutesOf(until)]);
  }
  const units = await db.pool.query<{ unit_key: string }[]>(
    `SELECT unit_key FROM dirty_units d JOIN units u ON u.id = d.unit_id
     WHERE d.lane = 1 AND d.from_at = '1970-01-01' ORDER BY unit_key`,
  );
  return { rebuilds: [...byId.values()], units: units.map((row) => row.unit_key) };
}
