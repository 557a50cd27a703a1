import type { AlertState, AlertView, ClearedBecause } from '../contract/alerts.js';
import type { WatchKind } from '../contract/watches.js';

/** An alert with its watch and its car, as the queries load it. */
export interface AlertRecord {
  id: number;
  state: AlertState;
  watch: { id: number; name: string; kind: WatchKind; personId: number; peopleIds: number[] };
  unit: { name: { unitId: string; display: string } | null; kind: string; carType: string | null };
  site: { code: string; name: string } | null;
  sinceAt: Date;
  atLeast: boolean;
  hours: number;
  raisedAt: Date;
  acknowledgedAt: Date | null;
  acknowledgedBy: { id: number; name: string } | null;
  clearedAt: Date | null;
  clearedBecause: ClearedBecause | null;
}

/** An alert as the contract has it. `mayAcknowledge`: whether the person may, by right. */
export function presentAlert(alert: AlertRecord, mayAcknowledge: boolean): AlertView {
  const { acknowledgedAt, acknowledgedBy, clearedAt, clearedBecause, watch, unit } = alert;
  const overSince = new Date(alert.sinceAt.getTime() + alert.hours * 3_600_000);
  return {
    id: alert.id,
    state: alert.state,
    kind: watch.kind,
    watch: { id: watch.id, name: watch.name },
    unitId: unit.name?.unitId ?? '',
    display: unit.name?.display ?? '',
    unitKind: unit.kind,
    carType: unit.carType,
    site: alert.site,
    since: alert.sinceAt.toISOString(),
    atLeast: alert.atLeast,
    hours: alert.hours,
    overSince: overSince.toISOString(),
    raisedAt: alert.raisedAt.toISOString(),
    acknowledged:
      acknowledgedAt && acknowledgedBy
        ? { at: acknowledgedAt.toISOString(), by: acknowledgedBy }
        : null,
    cleared:
      clearedAt && clearedBecause ? { at: clearedAt.toISOString(), because: clearedBecause } : null,
    can: { acknowledge: mayAcknowledge && alert.state === 'open' },
  };
}
