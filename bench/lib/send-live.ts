import http from 'node:http';
import { setTimeout as pause } from 'node:timers/promises';
import type { OpenClient } from './open-client.js';
import type { Portal, Sender } from './portal.js';
import { postReads } from './post-reads.js';
import { secondOf } from './yard-traffic.js';

/** Of the requests, every so many has one car whose way to the client is followed. */
const FOLLOWED = 5;

/**
 * Every site sends each second what its reader saw in it, at an instant of its own within the
 * second, for as long as `goOn` says. Answers the number of reads that were acknowledged.
 */
export async function sendLive(
  { port, senders }: Portal,
  client: OpenClient,
  goOn: () => boolean,
): Promise<number> {
  const agent = new http.Agent({ keepAlive: true });
  let acknowledged = 0;
  let requests = 0;
  const sendOne = async (site: number, { token }: Sender) => {
    const shift = (site / senders.length) * 1000;
    while (goOn()) {
      const now = Date.now();
      const ends = Math.ceil((now - shift) / 1000) * 1000 + shift;
      await pause(ends - now);
      const { reads, cars } = secondOf(site, Math.round(ends - 1000));
      if (reads.length === 0) continue;
      requests += 1;
      const followed = requests % FOLLOWED ? undefined : cars.at(-1);
      if (followed) client.expect(followed.unit, followed.lastAt);
      const body = Buffer.from(JSON.stringify({ reads }));
      const answer = await postReads({ agent, port, token, body });
      if (followed) client.acknowledged(followed.unit);
      const { accepted } = JSON.parse(answer) as { accepted?: number };
      if (accepted !== reads.length) throw new Error(`Not all were accepted: ${answer}`);
      acknowledged += accepted;
    }
  };
  try {
    await Promise.all(senders.map((sender, site) => sendOne(site, sender)));
  } finally {
    agent.destroy();
  }
  return acknowledged;
}

/** Waits until the client has seen all it wanted; throws when that takes longer than a minute. */
export async function seenAll(client: OpenClient): Promise<void> {
  const patience = performance.now() + 60_000;
  while (client.waiting > 0) {
    client.throwFault();
    if (performance.now() > patience) throw new Error(`${client.waiting} cars were never shown.`);
    await pause(50);
  }
  client.throwFault();
}
