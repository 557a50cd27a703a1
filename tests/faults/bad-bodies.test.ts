import { once } from 'node:events';
import net from 'node:net';
import type { AddressInfo } from 'node:net';
import fc from 'fast-check';
import request from 'supertest';
import { describe, expect, test } from 'vitest';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildIngestApp, buildReader, carTag, postReads, storedReads } from '../support/ingest.js';

const db = useTestDatabase();
const context = buildContext(db);
const app = buildIngestApp(context, { requestsPerSecond: 100_000 });

const send = (token: string, type: string, body: string | Buffer) =>
  request(app)
    .post('/api/ingest/reads')
    .auth(token, { type: 'bearer' })
    .set('Content-Type', type)
    .serialize((sent: string) => sent)
    .send(body);

describe('whatever a broken reader sends', () => {
  test('each read gets exactly one answer, and what is answered as stored is there', async () => {
    const { token } = await buildReader(db);
    const now = context.clock.now().getTime();
    const text = fc.oneof(
      fc.string({ unit: 'binary', maxLength: 70 }),
      fc.constantFrom(carTag(1), carTag(2), 'QTKX 1', '\u0000', '\ud800', '💥'.repeat(16), "'; --"),
    );
    const time = fc.oneof(
      fc.integer({ min: 0, max: 3 }).map((n) => new Date(now - n * 1000).toISOString()),
      fc.constantFrom('2016-12-31T23:59:60Z', '1990-01-01T00:00:00Z', '2100-12-31T23:59:59.999Z'),
    );
    const number = fc.oneof(fc.constantFrom(1, 1, 1, 255), fc.double(), fc.integer());
    const almostRead = fc.record(
      {
        antenna: fc.oneof(
          { weight: 4, arbitrary: fc.constantFrom(1, 2) },
          { arbitrary: number, weight: 1 },
        ),
        tag: fc.oneof({ weight: 4, arbitrary: text }, { arbitrary: fc.jsonValue(), weight: 1 }),
        readAt: fc.oneof({ weight: 4, arbitrary: time }, { arbitrary: fc.jsonValue(), weight: 1 }),
        rssi: number,
        count: number,
      },
      { requiredKeys: ['antenna', 'tag'] },
    );
    const anyRead = fc.oneof(
      { weight: 5, arbitrary: almostRead },
      { arbitrary: fc.jsonValue(), weight: 1 },
    );
    let expected = 0;
    await fc.assert(
      fc.asyncProperty(fc.array(anyRead, { maxLength: 30 }), async (reads) => {
        const { status, body } = await postReads(app, token, { reads });
        expect(status).toBe(200);
        const { accepted, duplicates, held, rejected, problems } = body as Record<
          string,
          number
        > & {
          problems: unknown[];
        };
        expect((accepted ?? 0) + (duplicates ?? 0) + (held ?? 0) + (rejected ?? 0)).toBe(
          reads.length,
        );
        expect(problems).toHaveLength((held ?? 0) + (rejected ?? 0));
        expected += (accepted ?? 0) + (held ?? 0);
        expect(await storedReads(db)).toHaveLength(expected);
      }),
      { numRuns: 60 },
    );
  });

  test('bytes of any kind are answered 200 or 400, never 500', async () => {
    const { token } = await buildReader(db);
    const bytes = fc.oneof(
      fc.uint8Array({ minLength: 1, maxLength: 200 }).map((array) => Buffer.from(array)),
      fc
        .string({ unit: fc.constantFrom(...'{}[]",:\\ \n"reads1e9'), maxLength: 60 })
        .map(Buffer.from),
    );
    const types = fc.constantFrom('application/json', 'application/x-ndjson');
    await fc.assert(
      fc.asyncProperty(bytes, types, async (body, type) => {
        const { status } = await send(token, type, body);
        expect([200, 400]).toContain(status);
      }),
      { numRuns: 200 },
    );
  });

  test('a million brackets are refused without a parser', async () => {
    const { token } = await buildReader(db);
    await send(token, 'application/json', `{"reads":${'['.repeat(1_000_000)}`).expect(400);
    await send(token, 'application/x-ndjson', '['.repeat(1_000_000)).expect(400);
  });

  test('half a character is refused, every whole one kept byte by byte', async () => {
    const { token } = await buildReader(db);
    const at = context.clock.now().toISOString();
    const body = `{"reads":[
      {"antenna":1,"tag":"\\ud83d","readAt":"${at}"},
      {"antenna":1,"tag":"\\ud83d\\ude82","readAt":"${at}"},
      {"antenna":1,"tag":"a\\u0000\\\\'b","readAt":"${at}"}]}`;
    const answer = await send(token, 'application/json', body).expect(200);
    expect(answer.body).toMatchObject({
      held: 2,
      rejected: 1,
      problems: [{ code: 'bad-value' }, {}, {}],
    });
    expect((await storedReads(db)).map((row) => row.tag)).toEqual(['🚂', "a\u0000\\'b"]);
  });

  test('a reader that hangs up within the body harms nobody', async () => {
    const { token } = await buildReader(db);
    const server = app.listen(0, '127.0.0.1');
    await once(server, 'listening');
    const socket = net.connect((server.address() as AddressInfo).port, '127.0.0.1');
    const received = once(server, 'request');
    socket.write(
      'POST /api/ingest/reads HTTP/1.1\r\nHost: reader\r\nContent-Type: application/json\r\n' +
        `Authorization: Bearer ${token}\r\nContent-Length: 500\r\n\r\n{"reads": [`,
    );
    const [, response] = (await received) as [unknown, NodeJS.EventEmitter];
    const closed = once(response, 'close');
    socket.destroy();
    await closed;
    await request(server)
      .post('/api/ingest/reads')
      .auth(token, { type: 'bearer' })
      .send({ reads: [] })
      .expect(200);
    server.close();
    await once(server, 'close');
    expect(await storedReads(db)).toEqual([]);
  });
});
