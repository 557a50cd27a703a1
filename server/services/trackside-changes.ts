import type { AntennaRow, PointRow, SiteRow, Trackside } from './load-trackside.js';
import {
  unitsEverAt,
  unitsEverSeen,
  unitsOfPoint,
  unitsStandingAt,
  type UnitSelect,
} from './mark-units-dirty.js';

/** One change along the track, and which part of history it can alter. */
export interface TracksideChange {
  /** What a person calls it. */
  words: string;
  /** Read points whose history it alters while the antenna (by site id and number) had reads. */
  whileRead?: { antenna: string; pointIds: number[] };
  /** Read points that it alters over all of their history. */
  wholePointIds?: number[];
  /** Read points whose passes it alters where their own reads tell no direction; all: every one. */
  undirectedPointIds?: number[] | 'all';
  /** Units whose stays it alters although what they went by stays as it is. */
  units?: UnitSelect;
}

/** What changed along the track that history hangs on. Names, and whatever else, do not count. */
export function tracksideChanges(before: Trackside, after: Trackside): TracksideChange[] {
  return [
    ...antennaChanges(before, after),
    ...pointChanges(before, after),
    ...siteChanges(before, after),
    ...routeChanges(before, after),
  ];
}

function antennaChanges(before: Trackside, after: Trackside): TracksideChange[] {
  const keys = new Set([...before.antennas.keys(), ...after.antennas.keys()]);
  return [...keys].flatMap((antenna) => {
    const was = before.antennas.get(antenna);
    const is = after.antennas.get(antenna);
    const what = wordsOfAntenna(was, is, after);
    if (what === null) return [];
    const points = distinct([was?.read_point_id, is?.read_point_id]);
    const movedOver = was?.read_point_id !== is?.read_point_id;
    const beside = movedOver ? points.flatMap((id) => parallelTo(id, before, after)) : [];
    const { site_id: siteId, number } = (is ?? was) as AntennaRow;
    const site = (after.sites.get(siteId) ?? before.sites.get(siteId))?.code ?? '';
    return [
      {
        words: `Antenna ${number} at ${site} ${what}`,
        whileRead: { antenna, pointIds: distinct([...points, ...beside]) },
        wholePointIds: points.filter((id) => hasOtherMeans(id, before, after)),
      },
    ];
  });
}

/** Null when nothing that matters has changed. */
function wordsOfAntenna(
  was: AntennaRow | undefined,
  is: AntennaRow | undefined,
  { points }: Trackside,
): string | null {
  if (!is) return 'removed';
  if (!was) return 'added';
  const offset = Number(is.offset_m);
  const parts = [
    was.read_point_id === is.read_point_id
      ? null
      : `moved to read point ${points.get(is.read_point_id)?.code ?? ''}`,
    Number(was.offset_m) === offset
      ? null
      : `moved to ${offset < 0 ? '−' : '+'}${Math.abs(offset)} m`,
    was.side === is.side ? null : `put on the ${is.side}`,
  ].filter((part) => part !== null);
  return parts.length > 0 ? parts.join(', ') : null;
}

/** Whether it has several offsets, or several antennas, changes how every visit is read. */
function hasOtherMeans(pointId: number, before: Trackside, after: Trackside): boolean {
  const [was, is] = [before, after].map(({ antennas }) => {
    const own = [...antennas.values()].filter((row) => row.read_point_id === pointId);
    const offsets = new Set(own.map((row) => Number(row.offset_m)));
    return `${offsets.size > 1} ${own.length > 1}`;
  });
  return was !== is;
}

function pointChanges(before: Trackside, after: Trackside): TracksideChange[] {
  return [...after.points.values()].flatMap((is) => {
    const was = before.points.get(is.id);
    return was ? changesOfPoint(was, is, before, after) : [];
  });
}

function changesOfPoint(
  was: PointRow,
  is: PointRow,
  before: Trackside,
  after: Trackside,
): TracksideChange[] {
  const differs = (...columns: (keyof PointRow)[]) =>
    columns.some((column) => was[column] !== is[column]);
  const name = `read point ${is.code} at ${after.sites.get(is.site_id)?.code ?? ''}`;
  const withParallel = [is.id, ...parallelTo(is.id, before, after)];
  const units = unitsOfPoint(is.id);
  const places = ['decreasing_site_id', 'decreasing_track', 'increasing_site_id'] as const;
  return [
    differs('kind')
      ? { words: `Kind of ${name} changed`, wholePointIds: withParallel, units }
      : null,
    differs(...places, 'increasing_track', 'track')
      ? { words: `Places of ${name} changed`, wholePointIds: withParallel, units }
      : null,
    differs('visit_gap_seconds')
      ? {
          words: `Visit gap of ${name} set to ${is.visit_gap_seconds} s`,
          wholePointIds: withParallel,
        }
      : null,
    differs('pass_gap_seconds')
      ? { words: `Pass gap of ${name} set to ${is.pass_gap_seconds} s`, wholePointIds: [is.id] }
      : null,
    differs('toward')
      ? { words: `Lines at ${name} changed`, undirectedPointIds: [is.id], units }
      : null,
    differs('drill_minutes')
      ? { words: `Drill minutes of ${name} set to ${is.drill_minutes}`, units }
      : null,
  ].filter((change) => change !== null);
}

function siteChanges(before: Trackside, after: Trackside): TracksideChange[] {
  return [...after.sites.values()].flatMap((is) => {
    const was = before.sites.get(is.id);
    return was ? changesOfSite(was, is, after) : [];
  });
}

function changesOfSite(was: SiteRow, is: SiteRow, { points }: Trackside): TracksideChange[] {
  const own = [...points.values()].filter((point) =>
    [point.site_id, point.decreasing_site_id, point.increasing_site_id].includes(is.id),
  );
  const undirectedPointIds = own.map(({ id }) => id);
  const units = unitsEverAt(is.id);
  return [
    leadsOf(was) === leadsOf(is)
      ? null
      : { words: `Leads of ${is.code} changed`, undirectedPointIds, units },
    was.return_hours === is.return_hours
      ? null
      : {
          words: `Return hours of ${is.code} set to ${Number(is.return_hours)}`,
          undirectedPointIds,
          units,
        },
    (was.kind === 'line') === (is.kind === 'line')
      ? null
      : { words: `Kind of ${is.code} changed`, undirectedPointIds, units },
    was.dwell_limit_hours === is.dwell_limit_hours
      ? null
      : { words: `Dwell limit of ${is.code} changed`, units: unitsStandingAt(is.id) },
  ].filter((change) => change !== null);
}

/** How many leads there are and which are equipped; what they are called changes nothing. */
function leadsOf({ leads }: SiteRow): string {
  const listed = JSON.parse(leads) as { equipped: boolean }[];
  return listed
    .map(({ equipped }) => String(equipped))
    .sort()
    .join();
}

function routeChanges(before: Trackside, after: Trackside): TracksideChange[] {
  if (before.edges === after.edges) return [];
  return [{ words: 'Route graph changed', undirectedPointIds: 'all', units: unitsEverSeen() }];
}

/** Read points that hear the same trains on the next track, before or after the change. */
function parallelTo(pointId: number, before: Trackside, after: Trackside): number[] {
  const found = [before, after].flatMap(({ points }) => {
    const own = points.get(pointId);
    return [...points.values()].filter((other) => own && areParallel(own, other));
  });
  return distinct(found.map(({ id }) => id));
}

function areParallel(a: PointRow, b: PointRow): boolean {
  return (
    a.id !== b.id &&
    a.site_id === b.site_id &&
    a.kind === 'line' &&
    b.kind === 'line' &&
    a.track !== b.track &&
    a.decreasing_site_id === b.decreasing_site_id &&
    a.increasing_site_id === b.increasing_site_id
  );
}

const distinct = (ids: readonly (number | undefined)[]): number[] => [
  ...new Set(ids.filter((id) => id !== undefined)),
];
