import { RateLimiterMemory, RateLimiterRes } from 'rate-limiter-flexible';
import { tooMany } from '../errors.js';

/** How much one reader token may send, and how long it may hesitate. */
export interface IngestLimits {
  requestsPerSecond: number;
  readsPerSecond: number;
  /** After this long without a byte of the body the request is answered 408. */
  idleMs: number;
}

export const defaultIngestLimits: IngestLimits = {
  requestsPerSecond: 100,
  readsPerSecond: 50_000,
  idleMs: 10_000,
};

/** Counts requests and reads of each token; both throw a 429 problem when it sends too fast. */
export function ingestMeter(limits: IngestLimits) {
  const requests = new RateLimiterMemory({ points: limits.requestsPerSecond, duration: 1 });
  const reads = new RateLimiterMemory({ points: limits.readsPerSecond, duration: 1 });
  return {
    countRequest: (tokenId: number) => consume(requests, tokenId, 1, 'requests'),
    countReads: (tokenId: number, count: number) => consume(reads, tokenId, count, 'reads'),
  };
}

async function consume(limiter: RateLimiterMemory, tokenId: number, points: number, what: string) {
  try {
    await limiter.consume(tokenId, points);
  } catch (error) {
    if (!(error instanceof RateLimiterRes)) throw error;
    throw tooMany(
      `At most ${limiter.points} ${what} a second come in by one token.`,
      error.msBeforeNext / 1000,
    );
  }
}
