import http from 'node:http';
import { setTimeout as pause } from 'node:timers/promises';
import { pathToFileURL } from 'node:url';
import { OpenClient } from './lib/open-client.js';
import { startPortal, type Portal } from './lib/portal.js';
import { postReads } from './lib/post-reads.js';
import { inSeconds, quantile } from './lib/quantile.js';
import { seenAll, sendLive } from './lib/send-live.js';
import { CARS_A_SITE, paceOf, secondOf } from './lib/yard-traffic.js';

/** A shorter run of fewer sites shows that it works, not how fast: `tsx bench/late.ts 5 10`. */
const SITES = Number(process.argv[3] ?? 50);
const RUNS = 3;
const LATE_SITES = 10;
const LATE_READS_A_SITE = 5_000;
const HOUR_MS = 3_600_000;
const BEFORE_MS = Number(process.argv[2] ?? 20) * 1000;
const WARM_UP_MS = 15_000;
/** What the late reads take at most before the measurement is given up. */
const PATIENCE_MS = 90_000;

/**
 * How long live reads take to an open client while 50,000 reads of two hours ago come in at once,
 * ten requests of 5,000 from ten sites that also send live, of cars that also go by live: from
 * the first late request to the last late read folded. Beside it the same before they come.
 */
export default async function bench(): Promise<void> {
  const portal = await startPortal({ sites: SITES, cars: SITES * CARS_A_SITE });
  try {
    const runs: Measured[] = [];
    for (let run = 0; run < RUNS; run += 1) runs.push(await measure(portal, run));
    report(runs);
  } finally {
    await portal.close();
  }
}

interface Measured {
  before: number[];
  meanwhile: number[];
  foldedMs: number;
}

async function measure(portal: Portal, run: number): Promise<Measured> {
  const client = await OpenClient.open(portal);
  let goOn = true;
  const sending = sendLive(portal, client, () => goOn);
  const checked = async <T>(act: Promise<T>) => Promise.race([act, sending.then(tooSoon)]);
  try {
    await checked(pause(WARM_UP_MS));
    client.startAnew();
    await checked(pause(BEFORE_MS));
    const before = [...client.delays];
    client.startAnew();
    const begun = performance.now();
    await checked(sendLate(portal, run));
    await checked(lateFolded(portal));
    const foldedMs = performance.now() - begun;
    goOn = false;
    await sending;
    await seenAll(client);
    return { before, meanwhile: [...client.delays], foldedMs };
  } finally {
    goOn = false;
    await sending.catch(() => undefined);
    client.close();
  }
}

function tooSoon(): never {
  throw new Error('The live traffic ended too soon.');
}

/** All at once; each run sends those of another hour. */
async function sendLate({ port, senders }: Portal, run: number): Promise<void> {
  const agent = new http.Agent({ keepAlive: true });
  const from = Math.floor(Date.now() / 1000) * 1000 - (2 + run) * HOUR_MS;
  const bodies = senders.slice(0, LATE_SITES).map((_sender, site) => {
    const reads = [];
    for (let second = 0; reads.length < LATE_READS_A_SITE; second += 1) {
      reads.push(...secondOf(site, from + second * 1000).reads);
    }
    return Buffer.from(JSON.stringify({ reads: reads.slice(0, LATE_READS_A_SITE) }));
  });
  await Promise.all(
    bodies.map(async (body, site) => {
      const { token } = senders[site] as Portal['senders'][number];
      const answer = await postReads({ agent, port, token, body });
      const { accepted } = JSON.parse(answer) as { accepted?: number };
      if (accepted !== LATE_READS_A_SITE) throw new Error(`Not all were accepted: ${answer}`);
    }),
  );
  agent.destroy();
}

/** Neither the queue nor the units of the late lane wait. */
async function lateFolded({ db }: Portal): Promise<void> {
  const patience = performance.now() + PATIENCE_MS;
  for (;;) {
    const [row] = await db.pool.query<{ waiting: number }[]>(
      `SELECT EXISTS (SELECT 1 FROM work WHERE lane = 1)
         OR EXISTS (SELECT 1 FROM dirty_units WHERE lane = 1) AS waiting`,
    );
    if (!row?.waiting) return;
    if (performance.now() > patience) throw new Error('The late reads were not folded in time.');
    await pause(100);
  }
}

function report(runs: readonly Measured[]): void {
  const late = LATE_SITES * LATE_READS_A_SITE;
  console.log(`late: ${late} late reads against ${paceOf(SITES)} live reads/s`);
  const line = (name: string, values: number[]) =>
    console.log(
      `  ${name} ${inSeconds(Math.min(...values))} (${values.map(inSeconds).join(', ')})`,
    );
  for (const [name, share] of [['p95', 0.95] as const, ['max', 1] as const]) {
    line(
      `live ${name}, before    `,
      runs.map(({ before }) => quantile(before, share)),
    );
    line(
      `live ${name}, meanwhile `,
      runs.map(({ meanwhile }) => quantile(meanwhile, share)),
    );
  }
  line(
    'late reads folded in',
    runs.map(({ foldedMs }) => foldedMs),
  );
  console.log('  aim: live reads are not later than 5 s');
}

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href) await bench();
