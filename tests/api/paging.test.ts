import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { equipmentSorts } from '../../server/contract/equipment.js';
import { buildBulkFleet } from '../support/bulk-fleet.js';
import { buildContext } from '../support/context.js';
import { countStatements } from '../support/count-statements.js';
import { useTestDatabase } from '../support/database.js';
import {
  buildOrganisation,
  buildPerson,
  buildSite,
  buildUnit,
  signIn,
} from '../support/factories.js';
import { hours, placeUnit } from '../support/histories.js';
import type { Organisation } from '../../server/models/organisation.js';
import type { Site } from '../../server/models/site.js';

const db = useTestDatabase();
const NOW = new Date('2026-03-10T12:00:00.000Z');
const COUNT = 1_000;
let owner: Organisation;
let sites: Site[];

beforeEach(async () => {
  owner = await buildOrganisation(db);
  sites = [await buildSite(db), await buildSite(db), await buildSite(db)];
  await buildBulkFleet(db, { count: COUNT, owner, sites, now: NOW });
});

const people = {
  owner: () => ({ roles: ['owner' as const], organisation: owner }),
  administrator: () => ({ roles: ['administrator' as const] }),
  dispatcher: () => ({ roles: ['dispatcher' as const], sites: sites.slice(0, 2) }),
  'owner and clerk': () => ({
    roles: ['owner' as const, 'clerk' as const],
    organisation: owner,
    sites: sites.slice(1),
  }),
};

async function openPortal(values: Parameters<typeof buildPerson>[1]) {
  const { context, statements } = countStatements(buildContext(db));
  context.clock.set(NOW);
  const agent = await signIn(createApp(context), await buildPerson(db, values));
  statements.take();
  return { context, agent, statements };
}

type Agent = Awaited<ReturnType<typeof signIn>>;

async function allPages(agent: Agent, query: string, between: () => void = () => undefined) {
  const unitIds: string[] = [];
  let cursor: string | null = null;
  do {
    const page: string = cursor ? `&cursor=${cursor}` : '';
    const { body } = await agent.get(`/api/equipment?${query}&limit=97${page}`).expect(200);
    unitIds.push(...body.data.map((row: { unitId: string }) => row.unitId));
    cursor = body.next;
    between();
  } while (cursor);
  return unitIds;
}

async function visibleTo(name: string): Promise<string[]> {
  const rows = await db.pool.query<{ unit_key: string }[]>(
    `SELECT u.unit_key FROM units u JOIN last_seen l ON l.unit_id = u.id
     WHERE ? <> 'dispatcher' OR l.site_id IN (?) ORDER BY u.unit_key`,
    [name, sites.slice(0, 2).map((site) => site.id)],
  );
  return rows.map((row) => row.unit_key);
}

describe.each(Object.entries(people))('%s', (name, valuesOf) => {
  test.each(equipmentSorts)('gets every row once when paging by %s', async (sort) => {
    const { agent } = await openPortal(valuesOf());
    const unitIds = await allPages(agent, `sort=${sort}`);
    expect(unitIds.toSorted()).toEqual(await visibleTo(name));
  });
});

test.each(equipmentSorts)('pages by %s stay whole while time goes on', async (sort) => {
  const { agent, context } = await openPortal(people.owner());
  const unitIds = await allPages(agent, `sort=${sort}`, () => context.clock.advance(hours(1)));
  expect(new Set(unitIds).size).toBe(COUNT);
  expect(unitIds).toHaveLength(COUNT);
});

test('administrators page by attention over strangers that went away too', async () => {
  for (let count = 0; count < 30; count += 1) {
    const stranger = await buildUnit(db, { registered: false });
    const [site = null] = sites;
    await placeUnit(db, stranger, { at: new Date(NOW.getTime() - hours(100 + count)), site });
  }
  const { agent } = await openPortal(people.administrator());
  const unitIds = await allPages(agent, 'sort=attention');
  expect(new Set(unitIds).size).toBe(COUNT + 30);
  expect(unitIds).toHaveLength(COUNT + 30);
});

test('attention puts quiet first, then past the limit, each the longest first', async () => {
  const { agent } = await openPortal(people.owner());
  const { body } = await agent.get('/api/equipment?sort=attention&limit=200').expect(200);
  const rows = body.data as { quiet: boolean; pastLimit: boolean; lastSeen: { at: string } }[];
  const words = rows.map((row) => (row.quiet ? 'quiet' : row.pastLimit ? 'past' : 'other'));
  const rank = { quiet: 0, past: 1, other: 2 };
  expect(words).toEqual(words.toSorted((a, b) => rank[a] - rank[b]));
  expect(new Set(words).size).toBeGreaterThan(1);
  const quietSince = rows.filter((row) => row.quiet).map((row) => row.lastSeen.at);
  expect(quietSince).toEqual(quietSince.toSorted());
});

describe('the number of statements for a list', () => {
  const statementsFor = async (agent: Agent, take: () => unknown[], query: string) => {
    take();
    await agent.get(`/api/equipment?${query}`).expect(200);
    return take().length;
  };

  test.each(['', 'sort=-lastSeen', 'sort=dwell', 'state=onHand', 'search=QTKX'])(
    'is the same for 200 rows as for one: %s',
    async (query) => {
      const { agent, statements } = await openPortal(people.owner());
      const count = (limit: number) =>
        statementsFor(agent, () => statements.take(), `${query}&limit=${limit}`);
      const forOne = await count(1);
      expect(forOne).toBeGreaterThan(0);
      expect(await count(200)).toBe(forOne);
      expect(forOne).toBeLessThanOrEqual(6);
    },
  );

  test('grows by one statement at most on the last page by attention', async () => {
    const { agent, statements } = await openPortal(people.owner());
    const query = 'state=enRoute&limit=200';
    const first = await agent.get(`/api/equipment?${query}`).expect(200);
    const before = statements.take().length;
    const cursor: string = first.body.next;
    const last = await agent.get(`/api/equipment?${query}&cursor=${cursor}`).expect(200);
    expect(last.body).toMatchObject({ data: { length: 100 }, next: null });
    expect(statements.take()).toHaveLength(before + 1);
  });
});
