import { RateLimiterMemory, RateLimiterRes } from 'rate-limiter-flexible';
import { tooMany } from '../errors.js';

export interface SignInLimits {
  /** Failures for one mail address from one network address. */
  perAddress: number;
  /** Failures from one network address, whoever is asked for. */
  perSource: number;
  seconds: number;
}

export const usualSignInLimits: SignInLimits = { perAddress: 8, perSource: 100, seconds: 900 };

/**
 * Counts sign-ins before they are tried, so that many at once count too; `succeeded` gives the
 * attempt back.
 */
export class SignInLimiter {
  private readonly perAddress: RateLimiterMemory;
  private readonly perSource: RateLimiterMemory;

  constructor(limits: SignInLimits = usualSignInLimits) {
    const duration = limits.seconds;
    this.perAddress = new RateLimiterMemory({ points: limits.perAddress, duration });
    this.perSource = new RateLimiterMemory({ points: limits.perSource, duration });
  }

  /** Throws 429 with Retry-After when either count is used up. */
  async attempt(email: string, source: string): Promise<void> {
    await spend(this.perSource, source);
    await spend(this.perAddress, `${source} ${email}`);
  }

  async succeeded(email: string, source: string): Promise<void> {
    await this.perSource.reward(source);
    await this.perAddress.delete(`${source} ${email}`);
  }
}

async function spend(limiter: RateLimiterMemory, key: string): Promise<void> {
  try {
    await limiter.consume(key);
  } catch (refusal) {
    if (!(refusal instanceof RateLimiterRes)) throw refusal;
    throw tooMany('Too many tries to sign in. Wait a while.', refusal.msBeforeNext / 1_000);
  }
}
