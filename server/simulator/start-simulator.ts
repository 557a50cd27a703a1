import type { Clock } from '../lib/clock.js';
import { batchesOf, bySite } from './batches.js';
import { SiteSender } from './site-sender.js';
import { Traffic } from './traffic.js';

export interface SimulatorOptions {
  /** Where the server answers, as `http://127.0.0.1:4300`. */
  address: string;
  /** Reader tokens by site code; sites without one stay silent. */
  tokens: Map<string, string>;
  clock: Clock;
  /** Traffic from here on; from now when not given. */
  from?: Date;
  /** Told of each request that failed; it is tried again. */
  onError?: (error: unknown) => void;
  intervalMs?: number;
}

export interface Simulator {
  /** Ends after the requests under way; what was not sent comes with the next start. */
  stop(): Promise<void>;
}

/** Sends live traffic to the ingest door, as the readers of the demo's sites would. */
export function startSimulator(options: SimulatorOptions): Simulator {
  const { address, tokens, clock, onError = () => undefined, intervalMs = 1_000 } = options;
  const traffic = new Traffic();
  const senders = new Map(
    [...tokens].map(([site, token]) => [site, new SiteSender({ address, site, token, onError })]),
  );
  let from = (options.from ?? clock.now()).getTime();
  const tick = () => {
    const to = clock.now().getTime();
    if (to <= from) return;
    for (const [site, sent] of bySite(traffic.between(from, to))) {
      senders.get(site)?.send(batchesOf(sent));
    }
    from = to;
  };
  const timer = setInterval(tick, intervalMs);
  return {
    async stop() {
      clearInterval(timer);
      await Promise.all([...senders.values()].map((sender) => sender.stop()));
    },
  };
}
