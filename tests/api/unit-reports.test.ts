import { randomUUID } from 'node:crypto';
import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import type { Role } from '../../server/contract/common.js';
import { unitReportsAnswer, type UnitReportView } from '../../server/contract/unit-reports.js';
import { aarIdentity } from '../../server/domain/identifiers/identity.js';
import { modelsOf } from '../../server/models/index.js';
import type { Organisation } from '../../server/models/organisation.js';
import type { Site } from '../../server/models/site.js';
import type { Unit } from '../../server/models/unit.js';
import { buildClock, buildContext } from '../support/context.js';
import { countStatements } from '../support/count-statements.js';
import { useTestDatabase } from '../support/database.js';
import {
  buildOrganisation,
  buildPerson,
  buildSite,
  buildUnit,
  signIn,
} from '../support/factories.js';
import { placeUnit } from '../support/histories.js';
import { buildReporter, postReports } from '../support/reports.js';

const db = useTestDatabase();
const clock = buildClock('2026-12-01T12:00:00Z');
const context = buildContext(db, { clock });
const app = createApp(context, { clientDirectory: null });
const PATH = '/api/equipment/QTKX40127/reports';
const at = (hour: number) => `2026-12-01T${String(hour).padStart(2, '0')}:00:00.000Z`;

let [alder, birch]: Site[] = [];
let owner: Organisation;
let unit: Unit;
let reporter: Awaited<ReturnType<typeof buildReporter>>;
let eyeId: string;

beforeEach(async () => {
  alder = await buildSite(db, { code: 'ALDER', name: 'Alder Bend Yard' });
  birch = await buildSite(db, { code: 'BIRCH', name: 'Birch Yard' });
  owner = await buildOrganisation(db);
  unit = await buildUnit(db, { identity: aarIdentity('QTKX', 40127), owner });
  await placeUnit(db, unit, { state: 'onHand', at: new Date(at(11)), site: alder });
  reporter = await buildReporter(context);
  const report = { reference: 'm1', unit: 'QTKX 40127', event: 'arrived', at: at(8) };
  const reports = [
    { ...report, site: 'BIRCH' },
    { ...report, reference: 'm2', event: 'placed', at: at(9), site: 'ALDER' },
    { ...report, reference: 'm3', unit: 'QTKX 9', site: 'ALDER' },
  ];
  await postReports(app, reporter.token, { source: 'car-desk', reports }).expect(200);
  const clerk = await as('clerk', [birch]);
  eyeId = randomUUID();
  const seen = { id: eyeId, unit: 'QTKX40127', at: at(7), position: 2, seen: true };
  await clerk.post('/api/sites/BIRCH/hand-reports').send({ track: '4', reports: [seen] });
});

const as = async (role: Role, sites: (Site | undefined)[] = [], organisation = owner, door = app) =>
  signIn(
    door,
    await buildPerson(db, {
      ...{ roles: [role], organisation, name: 'Ada Quill' },
      sites: sites.filter((site) => site !== undefined),
    }),
  );

const shortly = (rows: UnitReportView[]) =>
  rows.map((row) => [row.at.slice(11, 13), row.kind, row.site.code]);

describe('the reports of a car', () => {
  test('are both kinds, latest first, with where they come from for an administrator', async () => {
    const { body } = await (await as('administrator')).get(PATH).expect(200);
    expect(unitReportsAnswer.parse(body)).toEqual(body);
    expect(body.data).toEqual([
      {
        kind: 'movement',
        id: expect.stringMatching(/^\d+$/),
        at: at(9),
        site: { code: 'ALDER', name: 'Alder Bend Yard' },
        event: 'placed',
        organisation: { code: reporter.organisation.code, name: reporter.organisation.name },
        source: 'car-desk',
        reference: 'm2',
        receivedAt: clock.now().toISOString(),
      },
      expect.objectContaining({ event: 'arrived', at: at(8) }),
      {
        kind: 'hand',
        id: eyeId,
        unitId: 'QTKX40127',
        display: 'QTKX 40127',
        at: at(7),
        site: { code: 'BIRCH', name: 'Birch Yard' },
        track: '4',
        position: 2,
        seen: true,
        by: 'Ada Quill',
        receivedAt: clock.now().toISOString(),
        retracted: null,
        can: { retract: true },
      },
    ]);
    expect(body.can.reportAt).toEqual([
      { code: 'ALDER', name: 'Alder Bend Yard' },
      { code: 'BIRCH', name: 'Birch Yard' },
    ]);
  });

  test("are all its owner's to read, without the yard's people and others' references", async () => {
    const { body } = await (await as('owner')).get(PATH).expect(200);
    expect(shortly(body.data)).toEqual([
      ['09', 'movement', 'ALDER'],
      ['08', 'movement', 'BIRCH'],
      ['07', 'hand', 'BIRCH'],
    ]);
    expect(body.data[0]).toMatchObject({ source: null, reference: null });
    expect(body.data[2]).toMatchObject({ by: null, can: { retract: false } });
    expect(body.can).toEqual({ reportAt: [] });
  });

  test('are shown with their references to who sent them', async () => {
    await db.pool.query('UPDATE movement_reports SET organisation_id = ?', [owner.id]);
    const { body } = await (await as('owner')).get(PATH).expect(200);
    expect(body.data[0]).toMatchObject({ source: 'car-desk', reference: 'm2' });
  });

  test.each<[Role, string[], string[], boolean[]]>([
    ['clerk', ['ALDER'], ['ALDER'], []],
    ['clerk', ['ALDER', 'BIRCH'], ['ALDER', 'BIRCH'], [true]],
    ['dispatcher', ['ALDER', 'BIRCH'], [], [false]],
  ])('at sites of a %s of %s are theirs', async (role, codes, reportAt, retract) => {
    const sites = [alder, birch].filter((site) => site && codes.includes(site.code));
    const { body } = await (await as(role, sites)).get(PATH).expect(200);
    const data = body.data as UnitReportView[];
    const theirs = [
      ['09', 'movement', 'ALDER'],
      ['08', 'movement', 'BIRCH'],
      ['07', 'hand', 'BIRCH'],
    ].filter(([, , code]) => codes.includes(code ?? ''));
    expect(shortly(data)).toEqual(theirs);
    expect(body.can.reportAt.map(({ code }: { code: string }) => code)).toEqual(reportAt);
    const byEye = data.filter((row) => row.kind === 'hand');
    expect(byEye.map(({ can }) => can.retract)).toEqual(retract);
    expect(byEye.every(({ by }) => by === 'Ada Quill')).toBe(true);
  });

  test('are not there for who may not open the car', async () => {
    const strange = await as('owner', [], await buildOrganisation(db));
    await strange.get(PATH).expect(404);
    const elsewhere = await as('clerk', [await buildSite(db)]);
    await elsewhere.get(PATH).expect(404);
    await (await as('administrator')).get('/api/equipment/QTKX9/reports').expect(404);
  });

  test('say what was taken back, which nobody can take back again', async () => {
    const clerk = await as('clerk', [birch]);
    const ids = { ids: [eyeId] };
    await clerk.post('/api/sites/BIRCH/hand-reports/retractions').send(ids).expect(200);
    const { body } = await (await as('administrator')).get(PATH).expect(200);
    expect(body.data.at(-1)).toMatchObject({
      retracted: { at: clock.now().toISOString(), by: 'Ada Quill' },
      can: { retract: false },
    });
  });

  test('belong to who carried the number at that time', async () => {
    const { Identity } = modelsOf(db.sequelize);
    await Identity.update({ validTo: new Date(at(8)) }, { where: { unitId: unit.id } });
    const now = aarIdentity('QTKX', 50000);
    await Identity.create({ ...now, unitId: unit.id, validFrom: new Date(at(8)), validTo: null });
    const renumbered = await as('administrator');
    const { body } = await renumbered.get('/api/equipment/QTKX50000/reports').expect(200);
    expect(shortly(body.data)).toEqual([['07', 'hand', 'BIRCH']]);
    await renumbered.get(PATH).expect(308);
  });

  test('go on page by page, also where both kinds share an instant', async () => {
    const admin = await as('administrator');
    const same = { unit: 'QTKX 40127', at: at(10) };
    const seen = Array.from({ length: 5 }, () => ({ ...same, id: randomUUID(), seen: false }));
    await admin.post('/api/sites/BIRCH/hand-reports').send({ track: null, reports: seen });
    const reports = Array.from({ length: 5 }, (_, n) => {
      return { ...same, reference: `s${n}`, event: 'pulled', site: 'ALDER' };
    });
    await postReports(app, reporter.token, { source: 'car-desk', reports }).expect(200);
    const got: UnitReportView[] = [];
    let next: string | null = '';
    while (next !== null) {
      const { body } = await admin.get(`${PATH}?limit=3${next && `&cursor=${next}`}`).expect(200);
      got.push(...(body.data as UnitReportView[]));
      next = body.next as string | null;
    }
    expect(new Set(got.map(({ id }) => id)).size).toBe(13);
    expect(got).toHaveLength(13);
    const { body: whole } = await admin.get(PATH);
    expect(got).toEqual(whole.data);
  });

  test('cost as many statements for thirteen as for three', async () => {
    const { context: counted, statements } = countStatements(context);
    const door = createApp(counted, { clientDirectory: null });
    const admin = await as('administrator', [], owner, door);
    const countOf = async (rows: number) => {
      statements.take();
      const { body } = await admin.get(PATH).expect(200);
      expect(body.data).toHaveLength(rows);
      return statements.take().length;
    };
    const forThree = await countOf(3);
    const reports = Array.from({ length: 10 }, (_, n) => {
      return { reference: `n${n}`, unit: 'QTKX 40127', event: 'pulled', at: at(6), site: 'ALDER' };
    });
    await postReports(app, reporter.token, { source: 'car-desk', reports }).expect(200);
    expect(await countOf(13)).toBe(forThree);
  });

  test.each(['limit=201', 'cursor=x', 'from=2026-12-01T00:00:00Z'])('refuse ?%s', async (query) => {
    await (await as('administrator')).get(`${PATH}?${query}`).expect(400);
  });
});
