import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { encodeAei } from '../../server/domain/identifiers/aei.js';
import { aarIdentity } from '../../server/domain/identifiers/identity.js';
import { ingestReads } from '../../server/ingest/ingest-reads.js';
import { evaluateWatches } from '../../server/jobs/evaluate-watches.js';
import { sendOutbox } from '../../server/jobs/send-outbox.js';
import type { Site } from '../../server/models/site.js';
import { createProjector } from '../../server/projections/projector.js';
import { readMailbox } from '../../server/smtp-fake/read-mailbox.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import {
  buildAntenna,
  buildOrganisation,
  buildPerson,
  buildReadPoint,
  buildSite,
  buildUnit,
  signIn,
} from '../support/factories.js';
import { useSmtpFakes } from '../support/watches.js';

const db = useTestDatabase();
const startFake = useSmtpFakes();
const HOUR = 3_600_000;
const tagOf = (number: number) =>
  encodeAei({ groupCode: 19, initial: 'QTKX', number, side: 'left', lengthDm: 170 });

let alder: Site;

beforeEach(async () => {
  alder = await buildSite(db, { code: 'ALDER', name: 'Alder Bend Yard', returnHours: 12 });
  const lead = await buildReadPoint(db, { site: alder, code: 'N1' });
  await buildAntenna(db, { readPoint: lead, number: 1, offsetM: -3, side: 'left' });
  await buildAntenna(db, { readPoint: lead, number: 2, offsetM: 3, side: 'left' });
});

async function portal() {
  const fake = await startFake();
  const context = buildContext(db, {
    env: { smtpUrl: fake.url, publicUrl: 'http://portal.example' },
  });
  const { clock } = context;
  clock.set('2026-03-10T06:00:00.000Z');
  /** The car crosses the lead now; its reads go through the door and are folded. */
  const cross = async (number: number, way: 'in' | 'out') => {
    const antennas = way === 'in' ? [1, 2] : [2, 1];
    const reads = antennas.map((antenna, index) => ({
      antenna,
      tag: tagOf(number),
      readAt: new Date(clock.now().getTime() + index * 1_000).toISOString(),
    }));
    clock.advance(2_000);
    const answer = await ingestReads(db, { site: alder, reads, receivedAt: clock.now() });
    expect(answer).toMatchObject({ accepted: 2 });
    const projector = createProjector(context);
    await projector.drain();
    await projector.stop();
  };
  const runJobs = async () => ({
    ...(await evaluateWatches(context)),
    ...(await sendOutbox(context)),
  });
  return { context, clock, app: createApp(context), cross, runJobs, fake };
}

describe('from the read to the mail', () => {
  test('an owner is told when a car goes quiet, and the alert clears at its next read', async () => {
    const { app, clock, cross, runJobs, fake } = await portal();
    const owner = await buildOrganisation(db);
    const person = await buildPerson(db, { roles: ['owner'], organisation: owner });
    const tags = [{ value: tagOf(40127), side: 'left' as const }];
    await buildUnit(db, { identity: aarIdentity('QTKX', 40127), owner, tags });
    await cross(40127, 'out');
    const agent = await signIn(app, person);
    const watch = { name: 'My car', kind: 'quiet', scope: { units: ['QTKX 40127'] } };
    await agent.post('/api/watches').send(watch).expect(201);
    clock.advance(71 * HOUR);
    expect(await runJobs()).toMatchObject({ raised: 0, accepted: 0 });
    clock.advance(2 * HOUR);
    expect(await runJobs()).toMatchObject({ raised: 1, accepted: 1 });
    const [mail] = await readMailbox(fake.directory);
    expect(mail?.subject).toBe('QTKX 40127: quiet 3 d');
    expect(mail?.text).toContain('http://portal.example/equipment/QTKX40127\n');
    await cross(40127, 'in');
    expect(await runJobs()).toMatchObject({ cleared: 1, accepted: 0 });
    const again = await signIn(app, person);
    const { body } = await again.get('/api/alerts?state=cleared').expect(200);
    expect(body.data).toMatchObject([
      { unitId: 'QTKX40127', site: { code: 'ALDER' }, cleared: { because: 'read' } },
    ]);
  });

  test("a dispatcher is told of a stranger's car that overstays, until it has left for certain", async () => {
    const { app, clock, cross, runJobs, fake } = await portal();
    const person = await buildPerson(db, { roles: ['dispatcher'], sites: [alder] });
    const agent = await signIn(app, person);
    const watch = { name: 'Long', kind: 'dwell', hours: 48, scope: { sites: ['ALDER'] } };
    await agent.post('/api/watches').send(watch).expect(201);
    await cross(7, 'in');
    clock.advance(47 * HOUR);
    expect(await runJobs()).toMatchObject({ raised: 0 });
    clock.advance(2 * HOUR);
    expect(await runJobs()).toMatchObject({ raised: 1, accepted: 1 });
    const [mail] = await readMailbox(fake.directory);
    expect(mail?.subject).toBe('QTKX 7: past its limit, 49 h at Alder Bend Yard');
    await cross(7, 'out');
    clock.advance(11 * HOUR);
    expect(await runJobs()).toMatchObject({ cleared: 0 });
    clock.advance(2 * HOUR);
    expect(await runJobs()).toMatchObject({ cleared: 1 });
    const again = await signIn(app, person);
    const { body } = await again.get('/api/alerts?state=cleared').expect(200);
    expect(body.data).toMatchObject([{ unitId: 'QTKX7', cleared: { because: 'left' } }]);
  });
});
