import { pathToFileURL } from 'node:url';
import { bareVisible } from './lib/bare-visible.js';
import { OpenClient } from './lib/open-client.js';
import { startPortal, type Portal } from './lib/portal.js';
import { inSeconds, quantile } from './lib/quantile.js';
import { seenAll, sendLive } from './lib/send-live.js';
import { CARS_A_SITE, paceOf } from './lib/yard-traffic.js';

/** A shorter run of fewer sites shows that it works, not how fast: `tsx bench/visible.ts 5 10`. */
const SITES = Number(process.argv[3] ?? 100);
const RUNS = 3;
const SECONDS = Number(process.argv[2] ?? 60);
const WARM_UP_MS = 15_000;
const FLOOR_MS = (SECONDS * 1000) / 3;

/**
 * From the door's acknowledgement to the car as an open client shows it, at 2,000 reads a second:
 * a server process, reads over HTTP from a hundred sites, a person signed in whose event stream
 * names the car and who then asks for it. Of every fifth request one car is followed. Beside it,
 * in turns, the floor: the same rows inserted bare and polled for.
 */
export default async function bench(): Promise<void> {
  const portal = await startPortal({ sites: SITES, cars: SITES * CARS_A_SITE });
  try {
    const floors: number[][] = [];
    const runs: Measured[] = [];
    for (let run = 0; run < RUNS; run += 1) {
      floors.push(await bareVisible(portal, during(FLOOR_MS)));
      runs.push(await measure(portal));
    }
    report(floors, runs);
  } finally {
    await portal.close();
  }
}

interface Measured {
  delays: number[];
  pace: number;
  resets: number;
}

async function measure(portal: Portal): Promise<Measured> {
  const client = await OpenClient.open(portal);
  try {
    await sendLive(portal, client, during(WARM_UP_MS));
    await seenAll(client);
    client.startAnew();
    const begun = performance.now();
    const reads = await sendLive(portal, client, during(SECONDS * 1000));
    const pace = (reads * 1000) / (performance.now() - begun);
    await seenAll(client);
    return { delays: [...client.delays], pace, resets: client.resets };
  } finally {
    client.close();
  }
}

function during(ms: number): () => boolean {
  const until = performance.now() + ms;
  return () => performance.now() < until;
}

function report(floors: readonly number[][], runs: readonly Measured[]): void {
  const paces = runs.map(({ pace }) => Math.round(pace));
  const followed = runs.map(({ delays }) => delays.length);
  console.log(`visible: aim ${paceOf(SITES)} reads/s, came to ${paces.join(', ')}`);
  console.log(`  cars followed ${followed.join(', ')}; resets ${runs.map((r) => r.resets).join()}`);
  for (const share of [0.5, 0.95, 0.99]) {
    const name = `p${share * 100}`.padEnd(4);
    const floor = floors.map((delays) => quantile(delays, share));
    const seen = runs.map(({ delays }) => quantile(delays, share));
    console.log(
      `  ${name} floor ${inSeconds(Math.min(...floor))} (${floor.map(inSeconds).join(', ')})` +
        `  visible ${inSeconds(Math.min(...seen))} (${seen.map(inSeconds).join(', ')})`,
    );
  }
  console.log('  aim p95 2 s');
}

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href) await bench();
