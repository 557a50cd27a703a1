import type { Sent, SentRead, SentWheels } from './traffic.js';

/** What a reader sends in one request. */
export type Batch =
  | { kind: 'reads'; site: string; deliveredAt: number; reads: SentRead[] }
  | { kind: 'wheels'; site: string; deliveredAt: number; record: SentWheels };

/** A silence after which a reader does not wait for more before it sends. */
const GAP_MS = 120_000;

/**
 * Cuts what one site sends, in order of delivery, into requests: a train in one, at most `most`
 * reads each, each wheel record for itself after the reads before it.
 */
export function batchesOf(sent: Sent[], most = 500): Batch[] {
  const batches: Batch[] = [];
  let open: Extract<Batch, { kind: 'reads' }> | null = null;
  for (const each of sent) {
    const { site, deliveredAt } = each;
    if (each.kind === 'wheels') {
      batches.push({ kind: 'wheels', site, deliveredAt, record: each });
      continue;
    }
    if (!open || open.reads.length >= most || deliveredAt - open.deliveredAt > GAP_MS) {
      open = { kind: 'reads', site, deliveredAt, reads: [] };
      batches.push(open);
    }
    open.reads.push(each);
    open.deliveredAt = deliveredAt;
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
