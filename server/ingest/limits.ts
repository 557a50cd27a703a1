import type { ServerResponse } from 'node:http';
import { RateLimiterMemory, RateLimiterRes } from 'rate-limiter-flexible';
import { tooMany, unavailable } from '../errors.js';

/** How much one reader token may send, and how long it may hesitate. */
export interface IngestLimits {
  requestsPerSecond: number;
  readsPerSecond: number;
  /** After this long without a byte of the body the request is answered 408. */
  idleMs: number;
  /** Bytes of bodies that one token may have under way; each counts until its answer is out. */
  bytesUnderWay: number;
  /** The same for all tokens together. */
  bytesUnderWayOfAll: number;
}

export const defaultIngestLimits: IngestLimits = {
  requestsPerSecond: 100,
  readsPerSecond: 50_000,
  idleMs: 10_000,
  bytesUnderWay: 32 * 1024 * 1024,
  bytesUnderWayOfAll: 256 * 1024 * 1024,
};

/**
 * Counts what each token sends: requests and reads a second, and the bytes under way. All throw a
 * 429 problem when it is too much, and 503 when all tokens together have too much under way.
 */
export function ingestMeter(limits: IngestLimits, what: 'reads' | 'reports' = 'reads') {
  const requests = new RateLimiterMemory({ points: limits.requestsPerSecond, duration: 1 });
  const reads = new RateLimiterMemory({ points: limits.readsPerSecond, duration: 1 });
  return {
    countRequest: (tokenId: number) => consume(requests, tokenId, 1, 'requests'),
    countReads: (tokenId: number, count: number) => consume(reads, tokenId, count, what),
    countBytes: bytesUnderWay(limits),
  };
}

/**
 * Gives the counter for the bytes of one request; they count until its answer is out or its
 * connection is gone, so that neither slow bodies nor a slow database fill the memory.
 */
function bytesUnderWay(limits: IngestLimits) {
  const ofToken = new Map<number, number>();
  let ofAll = 0;
  return (tokenId: number, response: ServerResponse) => {
    let mine = 0;
    response.once('close', () => {
      const left = (ofToken.get(tokenId) ?? 0) - mine;
      if (left > 0) ofToken.set(tokenId, left);
      else ofToken.delete(tokenId);
      ofAll -= mine;
    });
    return (bytes: number): void => {
      const together = (ofToken.get(tokenId) ?? 0) + bytes;
      if (together > limits.bytesUnderWay) {
        throw tooMany('This token has too much under way at once.', 1);
      }
      if (ofAll + bytes > limits.bytesUnderWayOfAll) {
        throw unavailable('Too much is under way. Keep the reads and send them again.');
      }
      ofToken.set(tokenId, together);
      ofAll += bytes;
      mine += bytes;
    };
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
