import { expect, it } from 'vitest';
import { freePort } from '../../scripts/lib/mariadb.mjs';
import { waitUntil } from '../../scripts/lib/processes.mjs';
import { testDatabaseUrl, useTestDatabase } from '../support/database.js';
import { disorderedCase } from '../support/disordered-ledger.js';
import { postsOf, tokensOf, untilNow } from '../support/ledger-posts.js';
import { expectWholeHistory, expireLeases, isProjecting } from '../support/history-that-stands.js';
import { SeededRandom } from '../support/seeded-random.js';
import { sendUntilTaken } from '../support/send-until-taken.js';
import { useServerProcesses } from '../support/server-process.js';
import { storeConfiguration } from '../support/store-configuration.js';

const db = useTestDatabase();
const launch = useServerProcesses();
const isLong = import.meta.env.TEST_MODE === 'long';
const SEEDS = Array.from({ length: isLong ? 12 : 1 }, (_, index) => 301 + index);
const READS = isLong ? 6_000 : 1_200;
const KILLS = isLong ? 12 : 3;

it.each(SEEDS)(
  'loses and doubles nothing when the server is killed again and again (seed %i)',
  { timeout: isLong ? 900_000 : 300_000 },
  async (seed) => {
    const random = new SeededRandom(seed);
    const { configuration, ledger: drawn } = disorderedCase(seed, READS);
    const ledger = untilNow(drawn);
    await storeConfiguration(db, configuration);
    const posts = postsOf(ledger, configuration, random);
    const at = { port: await freePort(), databaseUrl: testDatabaseUrl() };
    let server = await launch(at);
    const sending = sendUntilTaken(posts, await tokensOf(db, configuration), () => server.address);
    let inFold = 0;
    for (let kill = 1; kill <= KILLS; kill += 1) {
      const share = Math.min(1, (kill - random.next()) / (KILLS - 1));
      await waitUntil(() => sending.answered >= share * posts.length, 60_000, 1);
      const wantsFold = random.chance(0.6);
      if (wantsFold) await waitUntil(() => isProjecting(db), 2_000, 1);
      inFold += (await isProjecting(db)) ? 1 : 0;
      await server.kill();
      await expireLeases(db);
      server = await launch(at);
    }
    await server.ready;
    await sending.done;
    await expectWholeHistory(db, configuration, ledger);
    // Some were killed with requests on their way, and some within the transaction of a fold.
    expect(sending.lost).toBeGreaterThan(0);
    expect(inFold).toBeGreaterThan(0);
  },
);
