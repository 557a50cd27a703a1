import { waitUntil } from '../../scripts/lib/processes.mjs';
import type { Post } from './ledger-posts.js';

const PATIENCE_MS = 90_000;

/** An answer other than 200 to a request that was then sent again. */
export interface Refusal {
  status: number;
  type: string | null;
  retryAfter: string | null;
}

/** How far the sending has come. */
export interface Sending {
  /** Requests that were answered 200. */
  answered: number;
  /** Requests on their way. */
  underWay: number;
  /** Requests whose connection broke, or fell silent, before an answer. */
  lost: number;
  refusals: Refusal[];
  done: Promise<void>;
}

/**
 * Sends every request until it is answered 200, as readers do: several at once, each again after a
 * broken line, 429 or 503. Any other answer ends the sending with a fault.
 */
export function sendUntilTaken(
  posts: readonly Post[],
  tokens: Map<number, string>,
  address: () => string,
  clients = 6,
): Sending {
  const sending: Sending = {
    answered: 0,
    underWay: 0,
    lost: 0,
    refusals: [],
    done: Promise.resolve(),
  };
  const rest = [...posts];
  const client = async () => {
    for (let post = rest.pop(); post; post = rest.pop()) {
      const own = post;
      const token = tokens.get(own.siteId) as string;
      const isTaken = await waitUntil(() => send(own, address(), token, sending), PATIENCE_MS, 20);
      if (!isTaken) throw new Error(`A request was not taken within ${PATIENCE_MS} ms.`);
    }
  };
  sending.done = Promise.all(Array.from({ length: clients }, client)).then(() => undefined);
  // Whoever waits for it hears of a fault; until then it must not end the run.
  sending.done.catch(() => undefined);
  return sending;
}

/** True when the request was taken, false when it is to be sent again. */
async function send(
  { path, body }: Post,
  address: string,
  token: string,
  sending: Sending,
): Promise<boolean> {
  sending.underWay += 1;
  try {
    const answer = await fetch(`${address}${path}`, {
      method: 'POST',
      headers: { authorization: `Bearer ${token}`, 'content-type': 'application/json' },
      body: JSON.stringify(body),
      signal: AbortSignal.timeout(30_000),
    });
    const text = await answer.text();
    if (answer.status === 200) {
      sending.answered += 1;
      return true;
    }
    if (answer.status !== 503 && answer.status !== 429) {
      throw new Refused(`${path} was answered ${answer.status}: ${text}`);
    }
    sending.refusals.push({
      status: answer.status,
      type: answer.headers.get('content-type'),
      retryAfter: answer.headers.get('retry-after'),
    });
    return false;
  } catch (error) {
    if (error instanceof Refused) throw error;
    const { code } = ((error as Error).cause ?? {}) as { code?: string };
    if (code !== 'ECONNREFUSED') sending.lost += 1;
    return false;
  } finally {
    sending.underWay -= 1;
  }
}

class Refused extends Error {}
