import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { withTransaction } from '../../server/lib/database.js';
import { planRebuild, type RebuildSpan } from '../../server/services/plan-rebuild.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildPerson, buildReadPoint, signIn } from '../support/factories.js';

const db = useTestDatabase();
const context = buildContext(db);
const app = createApp(context, { clientDirectory: null });
let admin: Awaited<ReturnType<typeof signIn>>;
let adminId: number;
let pointId: number;

beforeEach(async () => {
  const person = await buildPerson(db, { name: 'Ada Quill' });
  adminId = person.id;
  admin = await signIn(app, person);
  pointId = (await buildReadPoint(db)).id;
});

const hour = (text: string) => new Date(`2026-03-04T${text}:00:00Z`);
const span = (from: string, to: string, readPointId = pointId): RebuildSpan => ({
  readPointId,
  since: hour(from),
  until: hour(to),
});

const plan = (label: string, spans: RebuildSpan[], requestedBy: number | null = adminId) =>
  withTransaction(db.pool, (connection) =>
    planRebuild(connection, { cause: 'configuration', label, requestedBy, spans }),
  ) as Promise<number>;

const stateOf = async (id: number) => {
  const [row] = await db.pool.query<{ state: string }[]>(
    'SELECT state FROM rebuilds WHERE id = ?',
    [id],
  );
  return row?.state;
};

describe('the list', () => {
  test('tells what each is for, how far it has come and what can be done', async () => {
    const id = await plan('Antenna 3 at ALDER moved to +6 m', [span('10', '12'), span('14', '16')]);
    await db.pool.query(
      `UPDATE rebuild_spans SET next_at = IF(since_at = ?, ?, next_at) WHERE rebuild_id = ?`,
      [hour('10'), hour('11'), id],
    );
    await db.pool.query("UPDATE rebuilds SET state = 'running' WHERE id = ?", [id]);
    const { body } = await admin.get('/api/rebuilds').expect(200);
    expect(body).toEqual({
      data: [
        {
          id,
          label: 'Antenna 3 at ALDER moved to +6 m',
          cause: 'configuration',
          state: 'running',
          doneShare: 0.25,
          readPoints: 1,
          since: '2026-03-04T10:00:00.000Z',
          until: '2026-03-04T16:00:00.000Z',
          requestedBy: { name: 'Ada Quill' },
          requestedAt: expect.stringMatching(/Z$/) as string,
          finishedAt: null,
          can: { stop: true, resume: false },
        },
      ],
      next: null,
    });
  });

  test('walks from the newest to the oldest, and by state', async () => {
    const ids = [];
    for (const label of ['one', 'two', 'three']) ids.push(await plan(label, [span('10', '12')]));
    await db.pool.query("UPDATE rebuilds SET state = 'done', finished_at = ? WHERE id = ?", [
      hour('13'),
      ids[1],
    ]);
    const first = await admin.get('/api/rebuilds?limit=2').expect(200);
    expect(first.body.data.map((row: { id: number }) => row.id)).toEqual([ids[2], ids[1]]);
    const second = await admin
      .get(`/api/rebuilds?limit=2&cursor=${first.body.next as string}`)
      .expect(200);
    expect(second.body).toMatchObject({ data: [{ id: ids[0] }], next: null });
    const { body } = await admin.get('/api/rebuilds?state=done').expect(200);
    expect(body.data).toMatchObject([
      {
        id: ids[1],
        doneShare: 1,
        finishedAt: '2026-03-04T13:00:00.000Z',
        can: { stop: false, resume: false },
      },
    ]);
  });

  test('refuses what it does not know, and whoever is no administrator', async () => {
    const { body } = await admin.get('/api/rebuilds?state=half&colour=red').expect(400);
    expect(body.errors.map(({ pointer }: { pointer: string }) => pointer).sort()).toEqual([
      '?colour',
      '?state',
    ]);
    for (const role of ['owner', 'clerk', 'dispatcher'] as const) {
      const other = await signIn(app, await buildPerson(db, { roles: [role] }));
      await other.get('/api/rebuilds').expect(403);
    }
  });
});

describe('stopping and going on', () => {
  test('stops what waits or runs, and lets it go on where it stopped', async () => {
    const id = await plan('one', [span('10', '12')]);
    const stopped = await admin.post(`/api/rebuilds/${id}/stop`).expect(200);
    expect(stopped.body.data).toMatchObject({
      id,
      state: 'stopped',
      can: { stop: false, resume: true },
    });
    await admin.post(`/api/rebuilds/${id}/stop`).expect(200);
    expect(await stateOf(id)).toBe('stopped');
    const resumed = await admin.post(`/api/rebuilds/${id}/resume`).expect(200);
    expect(resumed.body.data).toMatchObject({ state: 'waiting' });
    await admin.post(`/api/rebuilds/${id}/resume`).expect(200);
    expect(await stateOf(id)).toBe('waiting');
  });

  test('is too late for one that is done', async () => {
    const id = await plan('one', [span('10', '12')]);
    await db.pool.query("UPDATE rebuilds SET state = 'done'");
    for (const act of ['stop', 'resume']) {
      await admin.post(`/api/rebuilds/${id}/${act}`).expect(409);
    }
    expect(await stateOf(id)).toBe('done');
  });

  test('is nobody else’s business', async () => {
    const id = await plan('one', [span('10', '12')]);
    const clerk = await signIn(app, await buildPerson(db, { roles: ['clerk'] }));
    await clerk.post(`/api/rebuilds/${id}/stop`).expect(404);
    await admin.post(`/api/rebuilds/${id + 1}/stop`).expect(404);
    await admin.post('/api/rebuilds/first/stop').expect(404);
    expect(await stateOf(id)).toBe('waiting');
  });
});

describe('planning', () => {
  const spansOf = async (id: number) => {
    const rows = await db.pool.query<{ since_at: Date; until_at: Date; next_at: Date }[]>(
      'SELECT since_at, until_at, next_at FROM rebuild_spans WHERE rebuild_id = ? ORDER BY id',
      [id],
    );
    return rows.map((row) => [row.since_at, row.until_at, row.next_at]);
  };

  test('makes one span of those that touch', async () => {
    const id = await plan('one', [span('14', '15'), span('10', '12'), span('11', '13')]);
    expect(await spansOf(id)).toEqual([
      [hour('10'), hour('13'), hour('10')],
      [hour('14'), hour('15'), hour('14')],
    ]);
  });

  test('keeps read points apart', async () => {
    const other = (await buildReadPoint(db)).id;
    const id = await plan('one', [span('10', '12'), span('11', '13', other)]);
    expect(await spansOf(id)).toHaveLength(2);
  });

  test('cuts off what is frozen, and plans nothing of nothing', async () => {
    await db.pool.query('UPDATE config_state SET frozen_before = ?', [hour('11')]);
    const id = await plan('one', [span('08', '09'), span('10', '12')]);
    expect(await spansOf(id)).toEqual([[hour('11'), hour('12'), hour('11')]]);
    expect(await plan('frozen', [span('08', '11')])).toBeNull();
    expect(await plan('nothing', [])).toBeNull();
    const { body } = await admin.get('/api/rebuilds').expect(200);
    expect(body.data).toHaveLength(1);
  });
});
