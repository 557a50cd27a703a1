import type { PoolConnection } from 'mariadb';
import { afterEach, beforeEach, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import type { Organisation } from '../../server/models/organisation.js';
import type { Site } from '../../server/models/site.js';
import { buildBulkFleet } from '../support/bulk-fleet.js';
import { buildContext } from '../support/context.js';
import { countStatements, type AskedStatement } from '../support/count-statements.js';
import { useTestDatabase } from '../support/database.js';
import { buildOrganisation, buildPerson, buildSite, signIn } from '../support/factories.js';
import { rowsTouched, sortsOf } from '../support/look-at-plan.js';

const db = useTestDatabase();
const NOW = new Date('2026-03-10T12:00:00.000Z');
const COUNT = 20_000;
/** Rows that a page of 50 may touch: 51 for each of four sites and ranges, in index, table and join. */
const FEW = 3_000;

let owner: Organisation;
let sites: Site[];
let connection: PoolConnection;

beforeEach(async () => {
  owner = await buildOrganisation(db);
  sites = [];
  for (let count = 0; count < 41; count += 1) {
    sites.push(await buildSite(db, { code: `S${count}` }));
  }
  await buildBulkFleet(db, { count: COUNT, owner, sites, now: NOW });
  connection = await db.pool.getConnection();
});

afterEach(() => connection.release());

const people = {
  owner: () => ({ roles: ['owner' as const], organisation: owner }),
  administrator: () => ({ roles: ['administrator' as const] }),
  dispatcher: () => ({ roles: ['dispatcher' as const], sites: sites.slice(0, 4) }),
};

/** Statements of one request to the list, without those of the sign-in. */
async function statementsOf(name: keyof typeof people, query: string): Promise<AskedStatement[]> {
  const { context, statements } = countStatements(buildContext(db));
  context.clock.set(NOW);
  const agent = await signIn(createApp(context), await buildPerson(db, people[name]()));
  statements.take();
  await agent.get(`/api/equipment?${query}`).expect(200);
  return statements.take().filter(({ text }) => /last_seen|visible_units|identities/.test(text));
}

const everybody = Object.keys(people) as (keyof typeof people)[];

async function eachStatement(
  queries: string[],
  look: (statement: AskedStatement, who: string) => Promise<void>,
): Promise<void> {
  for (const name of everybody) {
    for (const query of queries) {
      const statements = await statementsOf(name, query);
      for (const statement of statements) await look(statement, `${name}, ${query}`);
    }
  }
}

test('pages of the default list, and by state or site, touch few rows and sort none', async () => {
  const queries = [
    '',
    'sort=-lastSeen',
    'sort=lastSeen',
    'state=enRoute',
    'state=enRoute&sort=-lastSeen',
    'state=onHand',
    'site=S3&sort=-lastSeen',
    'quiet=true',
    'pastLimit=true',
  ];
  await eachStatement(queries, async (statement, who) => {
    expect(await rowsTouched(connection, statement), who).toBeLessThan(FEW);
    expect(await sortsOf(connection, statement), who).toEqual([]);
  });
});

test('a number leads to its few cars, without a walk along the others', async () => {
  await eachStatement(
    ['search=12301', 'search=QTKX 12301', 'search=123'],
    async (statement, who) => {
      expect(await rowsTouched(connection, statement), who).toBeLessThan(FEW);
    },
  );
});

test('one site by attention reads no more than a few times what is there', async () => {
  await eachStatement(['site=S3'], async (statement, who) => {
    expect(await rowsTouched(connection, statement), who).toBeLessThan((8 * COUNT) / sites.length);
  });
});
