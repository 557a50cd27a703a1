import type { EquipmentKind } from '../identifiers/equipment-groups.js';
import { QUIET_HOURS, type Direction, type Network } from './configuration.js';
import type { FoldState, Previous } from './fold-state.js';
import type { PassKey } from './passes.js';

/** Where a unit was last seen and what follows from that; instants in ms. */
export interface LastSeen {
  at: number;
  state: 'onHand' | 'enRoute';
  /** Where it stands, left last, or (a line point) passed last. */
  siteId: number;
  track: string | null;
  /** Null: no reader saw it there. */
  readPointId: number | null;
  pass: PassKey | null;
  basis: Previous['basis'];
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

/** The last-seen row of a unit whose facts led to `state`; null when nobody has seen it. */
export function lastSeenOf(
  network: Network,
  { kind, registered }: FoldedUnit,
  state: FoldState,
): LastSeen | null {
  const { stay, previous } = state;
  if (!previous) return null;
  const open = stay?.departedAt === null ? stay : null;
  const limited = !NO_LIMITS.has(kind);
  const limitHours = open ? network.site(open.siteId).dwellLimitHours : 0;
  const { at, siteId, readPointId, pass, basis, direction } = previous;
  return {
    at,
    state: open ? 'onHand' : 'enRoute',
    siteId: open?.siteId ?? siteId,
    track: open?.track ?? null,
    readPointId,
    pass,
    basis,
    direction,
    staySiteId: stay?.siteId ?? null,
    stayFirstSeenAt: stay?.firstSeenAt ?? null,
    arrivedAt: open?.arrivedAt ?? null,
    quietAt: registered && limited && !open ? at + QUIET_HOURS * HOUR_MS : null,
    limitAt: limited && open ? (open.arrivedAt ?? open.firstSeenAt) + limitHours * HOUR_MS : null,
  };
}
