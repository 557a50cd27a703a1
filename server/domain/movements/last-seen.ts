import type { EquipmentKind } from '../identifiers/equipment-groups.js';
import { QUIET_HOURS, type Direction, type Network } from './configuration.js';
import type { FoldState } from './fold-state.js';
import type { Sighting } from './fold-unit.js';

/** Where a unit was last seen and what follows from that; instants in ms. */
export interface LastSeen {
  at: number;
  state: 'onHand' | 'enRoute';
  /** Where it stands, left last, or (a line point) passed last. */
  siteId: number;
  track: string | null;
  readPointId: number;
  direction: Direction | null;
  staySiteId: number | null;
  stayFirstSeenAt: number | null;
  /** Start of the open stay; null when it is not on hand or nobody saw it come. */
  arrivedAt: number | null;
  /** When it becomes quiet unless read again; null while that does not apply. */
  quietAt: number | null;
  /** When it has stood as long as its site allows; null while that does not apply. */
  limitAt: number | null;
}

const HOUR_MS = 3_600_000;
const NO_LIMITS: ReadonlySet<EquipmentKind> = new Set(['locomotive', 'endOfTrain']);

/** What of the register bears on a unit's limits. */
export interface FoldedUnit {
  kind: EquipmentKind;
  /** Nobody waits for a stranger: it is never quiet. */
  registered: boolean;
}

/** The last-seen row after `sighting`, the last of a unit's sightings, led to `state`. */
export function lastSeenOf(
  network: Network,
  { kind, registered }: FoldedUnit,
  state: FoldState,
  sighting: Sighting,
): LastSeen {
  const { stay, previous } = state;
  if (!previous) throw new Error('a sighting always leaves a previous one');
  const open = stay?.departedAt === null ? stay : null;
  const limited = !NO_LIMITS.has(kind);
  const limitHours = open ? network.site(open.siteId).dwellLimitHours : 0;
  return {
    at: previous.at,
    state: open ? 'onHand' : 'enRoute',
    siteId: open?.siteId ?? previous.siteId,
    track: open?.track ?? null,
    readPointId: sighting.readPointId,
    direction: sighting.direction,
    staySiteId: stay?.siteId ?? null,
    stayFirstSeenAt: stay?.firstSeenAt ?? null,
    arrivedAt: open?.arrivedAt ?? null,
    quietAt: registered && limited && !open ? previous.at + QUIET_HOURS * HOUR_MS : null,
    limitAt: limited && open ? (open.arrivedAt ?? open.firstSeenAt) + limitHours * HOUR_MS : null,
  };
}
