import { LANES, LATE_AFTER_MS, MOST_LATE_READS, type Lane } from '../domain/lanes.js';
import { inParts } from '../lib/bulk.js';
import type { DoorRead } from './append-reads.js';

/** Reads of one request that become one batch. */
export interface Part {
  lane: Lane;
  reads: DoorRead[];
}

/**
 * Parts the reads of a request by lane: all live ones in one part, late ones in parts of bounded
 * size, each a stretch of time, so that what belongs together is folded together.
 */
export function partReads(reads: DoorRead[], receivedAt: Date): Part[] {
  const border = receivedAt.getTime() - LATE_AFTER_MS;
  const isLate = ({ read }: DoorRead) => read.readAtMs < border;
  if (!reads.some(isLate)) return [{ lane: LANES.live, reads }];
  const live = reads.filter((read) => !isLate(read));
  const late = reads.filter(isLate).sort((a, b) => a.read.readAtMs - b.read.readAtMs);
  return [
    ...(live.length > 0 ? [{ lane: LANES.live, reads: live }] : []),
    ...inParts(late, MOST_LATE_READS).map((part) => ({ lane: LANES.late, reads: part })),
  ];
}
