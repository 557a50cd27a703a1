import type { Clock } from '../lib/clock.js';
import { batchesOf, bySite, type Batch } from './batches.js';
import { Sender } from './sender.js';
import { signIn } from './sign-in.js';
import { Traffic } from './traffic.js';

export interface SimulatorOptions {
  /** Where the server answers, as `http://127.0.0.1:4300`. */
  address: string;
  /** Reader tokens by site code; sites without one stay silent. */
  tokens: Map<string, string>;
  /** The railroad's token; without one it tells nothing of what no reader saw. */
  reportToken?: string;
  /** The clerk who writes down what is seen by eye; without one nobody does. */
  clerk?: { email: string; password: string };
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

/** Sends live traffic to the doors, as the readers and people of the demo's sites would. */
export function startSimulator(options: SimulatorOptions): Simulator {
  const { clock, intervalMs = 1_000 } = options;
  const traffic = new Traffic();
  const senders = sendersOf(options);
  let from = (options.from ?? clock.now()).getTime();
  const tick = () => {
    const to = clock.now().getTime();
    if (to <= from) return;
    for (const sent of bySite(traffic.between(from, to)).values()) {
      for (const batch of batchesOf(sent)) senders.get(senderNameOf(batch))?.send([batch]);
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

const RAILROAD = 'the railroad';
const CLERK = 'the clerk';

function senderNameOf({ kind, site }: Batch): string {
  if (kind === 'reports') return RAILROAD;
  return kind === 'hand' ? CLERK : site;
}

function sendersOf(options: SimulatorOptions): Map<string, Sender> {
  const { address, tokens, reportToken, clerk, onError = () => undefined } = options;
  const bearer = (token: string) => () => Promise.resolve({ authorization: `Bearer ${token}` });
  const sender = (name: string, credentials: () => Promise<Record<string, string>>) =>
    [name, new Sender({ address, name, credentials, onError })] as const;
  return new Map([
    ...[...tokens].map(([site, token]) => sender(site, bearer(token))),
    ...(reportToken ? [sender(RAILROAD, bearer(reportToken))] : []),
    ...(clerk ? [sender(CLERK, () => signIn(address, clerk))] : []),
  ]);
}
