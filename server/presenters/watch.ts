import type { WatchKind, WatchScope, WatchView } from '../contract/watches.js';
import type { StoredScope } from '../models/watch.js';

interface IdAndName {
  id: number;
  name: string;
}

/** A watch with all that it refers to, as the queries load it. */
export interface WatchRecord {
  id: number;
  /** Who set it. */
  personId: number;
  /** Whom it tells, in the order of their ids. */
  peopleIds: number[];
  name: string;
  kind: WatchKind;
  scope: StoredScope;
  includeOnHand: boolean;
  hours: number;
  addresses: string[];
  schedule: { at: 'once' };
  createdAt: Date;
  evaluatedAt: Date | null;
  openAlerts: number;
  /** Names of what the watch refers to, by id; what is gone is missing. */
  names: {
    people: Map<number, string>;
    units: Map<number, { unitId: string; display: string }>;
    owners: Map<number, string>;
    sites: Map<number, { code: string; name: string }>;
  };
}

/** A watch as the contract has it. */
export function presentWatch(watch: WatchRecord): WatchView {
  const { names, scope } = watch;
  const units = present(scope.unitIds, names.units);
  const sites = present(scope.siteIds, names.sites);
  return {
    id: watch.id,
    name: watch.name,
    kind: watch.kind,
    scope: presentScope(scope, units, sites),
    includeOnHand: watch.includeOnHand,
    hours: watch.hours,
    recipients: { people: watch.peopleIds, addresses: watch.addresses },
    schedule: watch.schedule,
    owner: { id: watch.personId, name: names.people.get(watch.personId) ?? '' },
    named: {
      units,
      owners: withNames(scope.ownerIds, names.owners),
      sites,
      people: withNames(watch.peopleIds, names.people),
    },
    openAlerts: watch.openAlerts,
    createdAt: watch.createdAt.toISOString(),
    evaluatedAt: watch.evaluatedAt?.toISOString() ?? null,
  };
}

function presentScope(
  scope: StoredScope,
  units: { unitId: string }[],
  sites: { code: string }[],
): WatchScope {
  return {
    ...(scope.unitIds ? { units: units.map((unit) => unit.unitId) } : {}),
    ...(scope.marks ? { marks: scope.marks } : {}),
    ...(scope.kinds ? { kinds: scope.kinds as WatchScope['kinds'] } : {}),
    ...(scope.ownerIds ? { owners: scope.ownerIds } : {}),
    ...(scope.siteIds ? { sites: sites.map((site) => site.code) } : {}),
  };
}

function present<T>(ids: number[] | undefined, names: Map<number, T>): T[] {
  return (ids ?? []).flatMap((id) => names.get(id) ?? []);
}

function withNames(ids: number[] | undefined, names: Map<number, string>): IdAndName[] {
  return (ids ?? []).flatMap((id) => {
    const name = names.get(id);
    return name === undefined ? [] : { id, name };
  });
}
