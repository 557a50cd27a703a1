import type { HoldCode } from '../contract/ingest.js';
import type { EpcValidities } from './door-configuration.js';
import type { SoundRead } from './judge-read.js';

const AHEAD_MS = 5 * 60_000;

/** The instants that the door judges clocks by. */
export interface DoorClock {
  latestMs: number;
  earliestMs: number;
}

/**
 * Raw reads are kept by whole months (UTC): the present one and `retainMonths` before it, but none
 * that has gone already when fewer were kept.
 */
export function doorClock(receivedAt: Date, retainMonths: number, frozenBeforeMs = 0): DoorClock {
  const kept = Date.UTC(receivedAt.getUTCFullYear(), receivedAt.getUTCMonth() - retainMonths, 1);
  return {
    latestMs: receivedAt.getTime() + AHEAD_MS,
    earliestMs: Math.max(kept, frozenBeforeMs),
  };
}

/** What the door sees of the configuration when it judges the reads of one request. */
export interface DoorSight {
  /** Numbers of the antennas of the site. */
  antennas: Set<number>;
  epcs: EpcValidities;
  clock: DoorClock;
}

/**
 * Why a read is set aside, or null. What the door alone can judge comes first: those verdicts are
 * facts of the ledger, all others follow from the configuration and may change with it.
 */
export function holdOf(read: SoundRead, { antennas, epcs, clock }: DoorSight): HoldCode | null {
  if (read.readAtMs > clock.latestMs) return 'clock-ahead';
  if (read.readAtMs < clock.earliestMs) return 'too-old';
  if (!antennas.has(read.antenna)) return 'unknown-antenna';
  if (read.tag.kind === 'hold') return read.tag.hold;
  if (read.tag.kind !== 'epc') return null;
  const validities = epcs.get(read.tag.value) ?? [];
  const isMapped = validities.some(({ from, to }) => from <= read.readAtMs && read.readAtMs < to);
  return isMapped ? null : 'unmapped-epc';
}

/** The sentence that goes with a hold in the answer to the reader. */
export const holdDetails: Record<HoldCode, string> = {
  'unknown-antenna': 'No antenna of this site has this number yet.',
  'undecodable-tag': 'The tag is no AEI tag, EPC or equipment number.',
  'check-failed': 'The check sum or check digit of the tag is wrong.',
  'unmapped-epc': 'No car or box is registered with this EPC at that time.',
  'not-equipment': 'The tag names no equipment.',
  'clock-ahead': 'The time is more than five minutes ahead.',
  'too-old': 'The time is before the months that reads are kept for.',
};
