import { describe, expect, test } from 'vitest';
import { createProjector } from '../../server/projections/projector.js';
import { buildClock, buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildPerson, signIn } from '../support/factories.js';
import { readerAt } from '../support/held-reads.js';
import { buildIngestApp, carTag, postReads } from '../support/ingest.js';

const db = useTestDatabase();
const clock = buildClock('2026-12-01T12:00:00.000Z');
const context = buildContext(db, { clock });
const app = buildIngestApp(context);
const at = (minutes: number) => new Date(clock.now().getTime() + minutes * 60_000).toISOString();

/** An EPC of the GS1 rail kind (GIAI-96), as in the standards tests. */
const GIAI = '3414257BF400000000003039';

/** Car QTKX 1, a reader with antenna 1, an administrator, and the projector that takes up the queue. */
async function scene() {
  const { readPoint, token } = await readerAt(db, 'ALDER', 'Alder Bend Yard');
  const agent = await signIn(app, await buildPerson(db));
  const tags = [{ value: carTag(1) }];
  await agent.post('/api/register').send({ unit: 'QTKX 1', kind: 'car', tags }).expect(200);
  const projector = createProjector(context);
  return {
    agent,
    async send(read: { antenna: number; tag: string; readAt: string }) {
      await postReads(app, token, { reads: [read] }).expect(200);
      await projector.drain();
    },
    drain: () => projector.drain(),
    antenna: (number: number) =>
      agent
        .post('/api/antennas')
        .send({ site: 'ALDER', readPoint: readPoint.code, number, offsetM: 3, side: 'left' })
        .expect(200),
    /** Reasons for which reads are set aside, as the administrator is told. */
    async aside(): Promise<string[]> {
      const { body } = await agent.get('/api/held-reads').expect(200);
      return (body as { data: { code: string }[] }).data.map(({ code }) => code);
    },
    /** When the car was last seen; null: never. */
    async lastSeen(): Promise<string | null> {
      const { body } = await agent.get('/api/equipment/QTKX1').expect(200);
      const { lastSeen } = (body as { data: { lastSeen: { at: string } | null } }).data;
      return lastSeen?.at ?? null;
    },
  };
}

describe('a read that is set aside', () => {
  test('from an unknown antenna is used once the antenna is added', async () => {
    const { send, antenna, drain, aside, lastSeen } = await scene();
    await send({ antenna: 2, tag: carTag(1), readAt: at(-60) });
    expect([await aside(), await lastSeen()]).toEqual([['unknown-antenna'], null]);
    await antenna(2);
    await drain();
    expect([await aside(), await lastSeen()]).toEqual([[], at(-60)]);
  });

  test('with an EPC is used once a car wears it, and aside again when it never did', async () => {
    const { agent, send, drain, aside, lastSeen } = await scene();
    await send({ antenna: 1, tag: GIAI, readAt: at(-60) });
    expect([await aside(), await lastSeen()]).toEqual([['unmapped-epc'], null]);
    const { body } = await agent.get('/api/held-reads/tags?code=unmapped-epc').expect(200);
    const [tag] = (body as { data: { tag: string; oldestAt: string }[] }).data;
    await agent
      .post('/api/register/QTKX1/tags')
      .send({ value: tag?.tag, side: 'left', validFrom: tag?.oldestAt })
      .expect(200);
    await drain();
    expect([await aside(), await lastSeen()]).toEqual([[], at(-60)]);
    const tags = [{ value: carTag(1) }];
    await agent.post('/api/register').send({ unit: 'QTKX 1', kind: 'car', tags }).expect(200);
    await drain();
    expect([await aside(), await lastSeen()]).toEqual([['unmapped-epc'], null]);
  });

  test('for a clock ahead is used once it is released, and not before', async () => {
    const { agent, send, drain, aside, lastSeen } = await scene();
    await send({ antenna: 1, tag: carTag(1), readAt: at(30) });
    expect([await aside(), await lastSeen()]).toEqual([['clock-ahead'], null]);
    await agent.post('/api/held-reads/release').send({ code: 'clock-ahead' }).expect(200);
    await drain();
    expect([await aside(), await lastSeen()]).toEqual([[], at(30)]);
  });

  test('for two reasons is told of the second when it is released', async () => {
    const { agent, send, antenna, drain, aside, lastSeen } = await scene();
    await send({ antenna: 2, tag: carTag(1), readAt: at(30) });
    await antenna(3);
    await drain();
    expect(await aside()).toEqual(['clock-ahead']);
    const release = () => agent.post('/api/held-reads/release').send({ code: 'clock-ahead' });
    expect((await release().expect(200)).body).toEqual({ data: { released: 1 } });
    await drain();
    expect([await aside(), await lastSeen()]).toEqual([['unknown-antenna'], null]);
    expect((await release().expect(200)).body).toEqual({ data: { released: 0 } });
    await antenna(2);
    await drain();
    expect([await aside(), await lastSeen()]).toEqual([[], at(30)]);
  });
});
