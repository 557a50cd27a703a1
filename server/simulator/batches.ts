import type { Sent, SentHandReport, SentRead, SentReport, SentWheels } from './traffic.js';

/** What a reader sends in one request, or somebody who tells what no reader saw. */
export type Batch =
  | { kind: 'reads'; site: string; deliveredAt: number; reads: SentRead[] }
  | { kind: 'wheels'; site: string; deliveredAt: number; record: SentWheels }
  | { kind: 'reports'; site: string; deliveredAt: number; reports: SentReport[] }
  | { kind: 'hand'; site: string; deliveredAt: number; report: SentHandReport };

/** A silence after which a reader does not wait for more before it sends. */
const GAP_MS = 120_000;
/** However dense they come, a reader keeps nothing longer. */
const LONGEST_MS = 10 * 60_000;

type OpenBatch = Extract<Batch, { kind: 'reads' | 'reports' }>;

/**
 * Cuts what one site sends, in order of delivery, into requests: a train in one, at most `most`
 * reads each, each wheel record for itself after the reads before it.
 */
export function batchesOf(sent: Sent[], most = 500): Batch[] {
  const batches: Batch[] = [];
  const open: { [Kind in OpenBatch['kind']]?: Extract<Batch, { kind: Kind }> } = {};
  for (const each of sent) {
    const { site, deliveredAt } = each;
    const isOver = (batch: OpenBatch, kept: Sent[]) =>
      kept.length >= most ||
      deliveredAt - batch.deliveredAt > GAP_MS ||
      deliveredAt - (kept[0]?.deliveredAt ?? deliveredAt) > LONGEST_MS;
    if (each.kind === 'wheels') {
      batches.push({ kind: 'wheels', site, deliveredAt, record: each });
    } else if (each.kind === 'hand') {
      batches.push({ kind: 'hand', site, deliveredAt, report: each });
    } else if (each.kind === 'report') {
      if (!open.reports || isOver(open.reports, open.reports.reports)) {
        open.reports = { kind: 'reports', site, deliveredAt, reports: [] };
        batches.push(open.reports);
      }
      open.reports.reports.push(each);
      open.reports.deliveredAt = deliveredAt;
    } else {
      if (!open.reads || isOver(open.reads, open.reads.reads)) {
        open.reads = { kind: 'reads', site, deliveredAt, reads: [] };
        batches.push(open.reads);
      }
      open.reads.reads.push(each);
      open.reads.deliveredAt = deliveredAt;
    }
  }
  return batches;
}

/** What each site sends, in its order. */
export function bySite(sent: Sent[]): Map<string, Sent[]> {
  const sites = new Map<string, Sent[]>();
  for (const each of sent) {
    const known = sites.get(each.site);
    if (known) known.push(each);
    else sites.set(each.site, [each]);
  }
  return sites;
}

/** A read as it goes over the wire. */
export function wireRead({ antenna, tag, readAt, rssi }: SentRead) {
  return { antenna, tag, readAt: new Date(readAt).toISOString(), rssi };
}

/** A wheel record with its instants, as the door hands it on. */
export function wheelRecord(record: SentWheels) {
  const { readPoint, startedAt, endedAt, axles, direction, speedKmh } = record;
  const times = { startedAt: new Date(startedAt), endedAt: new Date(endedAt) };
  return { readPoint, ...times, axles, direction, speedKmh };
}

/** A movement report as it goes over the wire, its source apart. */
export function wireReport({ reference, unit, event, at, site }: SentReport) {
  return { reference, unit, event, at: new Date(at).toISOString(), site };
}

/** A hand report with its instant, as the door hands it on. */
export function handReport({ id, unit, at, position, seen }: SentHandReport) {
  return { id, unit, at: new Date(at), position, seen };
}
