import { once } from 'node:events';
import { createServer } from 'node:http';
import request from 'supertest';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { allOperations } from '../../server/routes/all-routes.js';
import { replaceReportToken } from '../../server/services/replace-report-token.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildOrganisation, buildPerson, buildUnit, PASSWORD } from '../support/factories.js';
import { buildReader, carTag } from '../support/ingest.js';
import { sampleOf, spoiledBodies } from '../support/spoiled-bodies.js';
import { expectProblem } from '../support/use-door.js';

const db = useTestDatabase();
const context = buildContext(db);
const many = { perAddress: 1e9, perSource: 1e9, seconds: 1 };
const limits = { signIn: many, ingest: { requestsPerSecond: 1e6, readsPerSecond: 1e9 } };
const server = createServer(createApp(context, { limits, clientDirectory: null }));
beforeAll(async () => {
  server.listen(0, '127.0.0.1');
  await once(server, 'listening');
});
afterAll(async () => {
  server.close();
  server.closeAllConnections();
  await once(server, 'close');
});

/** In every run a part of the cases of each route; all of them in long mode. */
const STEP = import.meta.env.TEST_MODE === 'long' ? 1 : 6;

const withBody = allOperations.filter(({ body, bodyType }) => body && !bodyType);
/** They answer for each item of their list by itself. */
const judgedOneByOne = ['/api/ingest/reads', '/api/ingest/reports'];

/** A railroad with one of each, its administrator signed in. */
async function buildWorld() {
  const { site, readPoint, token } = await buildReader(db);
  const organisation = await buildOrganisation(db);
  const unit = await buildUnit(db, { owner: organisation });
  const person = await buildPerson(db, { sites: [site] });
  const agent = request.agent(server);
  await agent.post('/api/session').send({ email: person.email, password: PASSWORD }).expect(200);
  const watch = await agent.post('/api/watches').send({ name: 'A', kind: 'quiet' }).expect(201);
  const report = await replaceReportToken(context, organisation.id);
  const addresses: Record<string, string> = {
    '/api/watches/:id': `/api/watches/${watch.body.data.id as number}`,
  };
  const parts = { code: site.code, site: site.code, unitId: unit.unitKey, number: '1', id: '1' };
  return {
    agent,
    token,
    known: {
      site: site.code,
      readPoint: readPoint.code,
      unit: unit.unitKey,
      owner: organisation.code,
      organisation: organisation.code,
      password: PASSWORD,
      timeZone: 'America/Chicago',
      value: carTag(1),
      tag: carTag(1),
    },
    addressOf: (path: string) =>
      addresses[path] ??
      path.replace(/:(\w+)/g, (_all, name: string) => parts[name as keyof typeof parts] ?? '1'),
    tokens: { reader: token, reporter: report } as Record<string, string>,
  };
}

test('the walk finds every route that takes a body, and most samples are what it takes', () => {
  expect(withBody.length).toBeGreaterThan(15);
  const taken: string[] = [];
  for (const operation of withBody) {
    if (sampleIsSound(operation.body!)) taken.push(operation.path);
  }
  expect(taken.length).toBeGreaterThan(withBody.length / 2);
});

describe.each(withBody.map((operation) => [`${operation.method} ${operation.path}`, operation]))(
  '%s',
  (_name, { method, path, access = 'session', body: schema }) => {
    test('refuses whatever is not for it as a problem, and goes on', async () => {
      const { agent, known, addressOf, tokens, token } = await buildWorld();
      const address = addressOf(path);
      const send = (text: string) => {
        const client = access === 'session' ? agent : request(server);
        const call = client[method](address).type('application/json');
        if (tokens[access]) void call.auth(tokens[access], { type: 'bearer' });
        return call.serialize((sent: string) => sent).send(text);
      };
      const faults: string[] = [];
      const sample = sampleOf(schema!, known);
      const unspoiled = { what: 'nothing', text: JSON.stringify(sample) };
      for (const { what, text } of [unspoiled, ...spoiledBodies(sample, STEP)]) {
        const answer = await send(text);
        const fault = faultOf(answer);
        if (fault) faults.push(`${what}: ${fault}`);
        else if (answer.status < 300 && !isFor(text) && !judgedOneByOne.includes(path)) {
          faults.push(`${what}: taken with ${answer.status}`);
        }
      }
      expect(faults).toEqual([]);

      await request(server).get('/api/health').expect(200);
      await agent.get('/api/session').expect(200);
      const readAt = context.clock.now().toISOString();
      const reads = [{ antenna: 1, tag: carTag(1), readAt }];
      const door = request(server).post('/api/ingest/reads').auth(token, { type: 'bearer' });
      expect((await door.send({ reads })).body).toMatchObject({ rejected: 0 });
    });

    const isFor = (text: string) => {
      try {
        return schema!.safeParse(JSON.parse(text)).success;
      } catch {
        return false;
      }
    };
  },
);

/** Why an answer is neither a good one nor a problem document; null when it is. */
function faultOf(answer: request.Response): string | null {
  if (answer.status < 300) return null;
  if (answer.status >= 500) return `${answer.status}`;
  try {
    expectProblem(answer, answer.status);
    return null;
  } catch (error) {
    return String(error);
  }
}

function sampleIsSound(schema: NonNullable<(typeof withBody)[number]['body']>): boolean {
  const known = { timeZone: 'UTC', email: 'a@tests.example' };
  return schema.safeParse(sampleOf(schema, known)).success;
}
