import { describe, expect, test } from 'vitest';
import type { HoldCode } from '../../server/contract/ingest.js';
import { buildClock, buildContext } from '../support/context.js';
import { countStatements } from '../support/count-statements.js';
import { useTestDatabase } from '../support/database.js';
import { buildPerson, signIn } from '../support/factories.js';
import { readerAt, sendAhead, standing } from '../support/held-reads.js';
import { buildIngestApp, carTag, postReads } from '../support/ingest.js';
import { rowsTouched, sortsOf } from '../support/look-at-plan.js';

const db = useTestDatabase();
const clock = buildClock('2026-12-01T12:00:00.000Z');
const context = buildContext(db, { clock });
const app = buildIngestApp(context);
const MINUTE = 60_000;
const at = (minutes: number) => new Date(clock.now().getTime() + minutes * MINUTE).toISOString();
const administrator = async () => signIn(app, await buildPerson(db));

describe('what is set aside', () => {
  test('is told by site and reason, with its act and a sample', async () => {
    const alder = await readerAt(db, 'ALDER', 'Alder Bend Yard');
    const cairn = await readerAt(db, 'CAIRN', 'Cairn Junction');
    await sendAhead({ app, clock }, alder.token, 7);
    await postReads(app, cairn.token, {
      reads: [
        { antenna: 1, tag: carTag(1), readAt: at(-3) },
        { antenna: 9, tag: carTag(1), readAt: at(-3) },
        { antenna: 4, tag: carTag(2), readAt: at(-2) },
        { antenna: 1, tag: 'NO READ', readAt: at(-1) },
      ],
    }).expect(200);
    const agent = await administrator();
    const { body } = await agent.get('/api/held-reads').expect(200);
    expect(body).toMatchObject({
      next: null,
      counts: [
        { code: 'clock-ahead', count: 7 },
        { code: 'undecodable-tag', count: 1 },
        { code: 'unknown-antenna', count: 2 },
      ],
      data: [
        { code: 'clock-ahead', act: 'release', count: 7, stillAhead: 7, antennas: [] },
        { code: 'undecodable-tag', act: 'none', count: 1, stillAhead: null, antennas: [] },
        {
          code: 'unknown-antenna',
          act: 'addAntenna',
          site: { code: 'CAIRN', name: 'Cairn Junction' },
          count: 2,
          stillAhead: null,
          oldestAt: at(-3),
          newestAt: at(-2),
          antennas: [4, 9],
          sample: [
            {
              site: { code: 'CAIRN', name: 'Cairn Junction' },
              antenna: 4,
              tag: carTag(2),
              readAt: at(-2),
              receivedAt: at(0),
            },
            { antenna: 9, tag: carTag(1), readAt: at(-3) },
          ],
        },
      ],
    });
    const [ahead] = body.data as { sample: { tag: string }[] }[];
    expect(ahead?.sample.map(({ tag }) => tag)).toEqual([7, 6, 5, 4, 3].map(carTag));
  });

  test('whose time has come since is counted apart from what is still ahead', async () => {
    const { token } = await readerAt(db, 'ALDER', 'Alder Bend Yard');
    const reads = [10, 20, 30].map((minutes) => ({
      antenna: 1,
      tag: carTag(1),
      readAt: at(minutes),
    }));
    await postReads(app, token, { reads }).expect(200);
    const agent = await administrator();
    clock.advance(20 * MINUTE);
    const { body } = await agent.get('/api/held-reads').expect(200);
    expect(body.data).toMatchObject([{ count: 3, stillAhead: 1 }]);
  });

  test('comes page by page, each group once', async () => {
    for (const code of ['AAA', 'BBB', 'CCC']) {
      const { token } = await readerAt(db, code);
      await sendAhead({ app, clock }, token, 1);
      const reads = [{ antenna: 9, tag: carTag(1), readAt: at(0) }];
      await postReads(app, token, { reads }).expect(200);
    }
    const agent = await administrator();
    const seen: string[] = [];
    let cursor: string | null = '';
    while (cursor !== null) {
      const page = await agent.get(`/api/held-reads?limit=4${cursor && `&cursor=${cursor}`}`);
      const { data, next } = page.body as {
        data: { code: HoldCode; site: { code: string }; sample: object[] }[];
        next: string | null;
      };
      for (const group of data) {
        seen.push(`${group.site.code} ${group.code}`);
        expect(group.sample).toHaveLength(1);
      }
      cursor = next;
    }
    expect(seen).toEqual(
      ['AAA', 'BBB', 'CCC'].flatMap((code) => [`${code} clock-ahead`, `${code} unknown-antenna`]),
    );
  });

  test('is nothing where nothing is', async () => {
    const agent = await administrator();
    const { body } = await agent.get('/api/held-reads').expect(200);
    expect(body).toEqual({ data: [], next: null, counts: [] });
  });
});

describe('the reads themselves', () => {
  test('come latest first, page by page, each once, of one site or of all', async () => {
    const alder = await readerAt(db, 'ALDER', 'Alder Bend Yard');
    const cairn = await readerAt(db, 'CAIRN', 'Cairn Junction');
    await sendAhead({ app, clock }, alder.token, 5);
    await sendAhead({ app, clock }, cairn.token, 5);
    const agent = await administrator();
    const walk = async (filter: string) => {
      const seen: string[] = [];
      let cursor: string | null = '';
      while (cursor !== null) {
        const { body }: { body: { data: Record<string, never>[]; next: string | null } } =
          await agent
            .get(`/api/held-reads/reads?${filter}&limit=2${cursor && `&cursor=${cursor}`}`)
            .expect(200);
        const rows = body.data as unknown as { site: { code: string }; tag: string }[];
        seen.push(...rows.map(({ site, tag }) => `${site.code} ${tag}`));
        cursor = body.next;
      }
      return seen;
    };
    expect(await walk('code=clock-ahead&site=CAIRN')).toEqual(
      [5, 4, 3, 2, 1].map((number) => `CAIRN ${carTag(number)}`),
    );
    expect(await walk('code=clock-ahead')).toEqual(
      [5, 4, 3, 2, 1].flatMap((number) =>
        ['CAIRN', 'ALDER'].map((site) => `${site} ${carTag(number)}`),
      ),
    );
    expect(await walk('code=too-old')).toEqual([]);
  });

  test.each([
    ['', '?code'],
    ['code=late', '?code'],
    ['code=too-old&site=NOWHERE', '?site'],
    ['code=too-old&cursor=abc', '?cursor'],
    ['code=too-old&tag=1', '?tag'],
    ['code=too-old&limit=201', '?limit'],
  ])('asked for by %j are refused at %s', async (query, pointer) => {
    const agent = await administrator();
    const { body } = await agent.get(`/api/held-reads/reads?${query}`).expect(400);
    expect(body.errors).toMatchObject([{ pointer }]);
  });
});

describe('the tags', () => {
  test('of reads set aside for one reason come once each, whatever site read them', async () => {
    const alder = await readerAt(db, 'ALDER');
    const cairn = await readerAt(db, 'CAIRN');
    await sendAhead({ app, clock }, alder.token, 3);
    await sendAhead({ app, clock }, cairn.token, 2, 2);
    const agent = await administrator();
    const first = await agent.get('/api/held-reads/tags?code=clock-ahead&limit=2').expect(200);
    const { data, next } = first.body as { data: object[]; next: string };
    const query = `code=clock-ahead&limit=2&cursor=${encodeURIComponent(next)}`;
    const second = await agent.get(`/api/held-reads/tags?${query}`).expect(200);
    expect(second.body.next).toBeNull();
    const tags = [...data, ...(second.body as { data: object[] }).data];
    const at2 = new Date(clock.now().getTime() + 60 * MINUTE + 2_000).toISOString();
    expect(tags).toHaveLength(3);
    expect(tags).toMatchObject([
      { tag: carTag(1), count: 1 },
      { tag: carTag(2), count: 2, oldestAt: at2, newestAt: at2 },
      { tag: carTag(3), count: 2 },
    ]);
    await agent.get('/api/held-reads/tags?code=late').expect(400);
    await agent.get('/api/held-reads/tags?code=too-old&cursor=IiEi').expect(400);
  });
});

describe('who is not an administrator', () => {
  test.each(['owner', 'clerk', 'dispatcher'] as const)(
    '%s sees and releases nothing',
    async (role) => {
      const { site, token } = await readerAt(db, 'ALDER', 'Alder Bend Yard');
      await sendAhead({ app, clock }, token, 1);
      const agent = await signIn(app, await buildPerson(db, { roles: [role], sites: [site] }));
      await agent.get('/api/held-reads').expect(403);
      await agent.get('/api/held-reads/reads?code=clock-ahead&site=ALDER').expect(403);
      await agent.get('/api/held-reads/tags?code=clock-ahead').expect(403);
      await agent.post('/api/held-reads/release').send({ code: 'clock-ahead' }).expect(403);
      expect(await standing(db)).toMatchObject({ released: 0, held: 1 });
      const { body } = await agent.get('/api/session').expect(200);
      expect(body.data.sections).not.toContain('setAside');
    },
  );

  test('lacks the section that an administrator has', async () => {
    const { body } = await (await administrator()).get('/api/session').expect(200);
    expect(body.data.sections).toContain('setAside');
  });
});

describe('with very many', () => {
  const SITES = 20;
  const READS = 1_000;

  /** 20 sites of 1,000 reads each, half of them of one unknown antenna. */
  async function fill(): Promise<void> {
    for (let place = 0; place < SITES; place += 1) {
      const { token } = await readerAt(db, `S${place}`);
      const reads = Array.from({ length: READS }, (_, index) => ({
        antenna: index % 2 === 0 ? 9 : 1,
        tag: carTag(index + 1),
        readAt: at(index % 2 === 0 ? -10 : 10),
      }));
      await postReads(app, token, { reads }).expect(200);
    }
  }

  /** What a request asks the database about reads, without its sign-in. */
  async function statementsOf(address: string) {
    const counted = countStatements(context);
    const agent = await signIn(buildIngestApp(counted.context), await buildPerson(db));
    counted.statements.take();
    await agent.get(address).expect(200);
    return counted.statements.take().filter(({ text }) => /\bheld\b|`reads`/.test(text));
  }

  test('costs no more statements, and few rows for a page', async () => {
    const { token } = await readerAt(db, 'ALDER', 'Alder Bend Yard');
    await postReads(app, token, {
      reads: [
        { antenna: 9, tag: carTag(1), readAt: at(0) },
        { antenna: 1, tag: carTag(1), readAt: at(10) },
      ],
    }).expect(200);
    const addresses = [
      '/api/held-reads',
      '/api/held-reads/reads?code=clock-ahead',
      '/api/held-reads/reads?code=unknown-antenna&site=ALDER',
      '/api/held-reads/tags?code=clock-ahead&limit=5',
    ];
    const few = [];
    for (const address of addresses) few.push((await statementsOf(address)).length);
    expect(few).toEqual([4, 1, 1, 1]);
    await fill();
    const connection = await db.pool.getConnection();
    try {
      const [groups = [], ...pages] = [
        await statementsOf('/api/held-reads'),
        await statementsOf('/api/held-reads/reads?code=clock-ahead'),
        await statementsOf('/api/held-reads/reads?code=unknown-antenna&site=S3'),
        await statementsOf('/api/held-reads/tags?code=clock-ahead&limit=5'),
      ];
      expect([groups, ...pages].map((asked) => asked.length)).toEqual(few);
      for (const statement of pages.flat()) {
        expect(await rowsTouched(connection, statement)).toBeLessThan(200);
        expect(await sortsOf(connection, statement)).toEqual([]);
      }
      const ofLedger = groups.filter(({ text }) => text.includes('`reads`'));
      expect(ofLedger).toHaveLength(2);
      for (const statement of ofLedger) {
        expect(await rowsTouched(connection, statement)).toBeLessThan((SITES * READS) / 4);
      }
      for (const statement of groups) expect(await sortsOf(connection, statement)).toEqual([]);
    } finally {
      await connection.release();
    }
  });
});
