import request from 'supertest';
import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { mapAnswer, type EdgeFeature, type SiteFeature } from '../../server/contract/map.js';
import { modelsOf } from '../../server/models/index.js';
import type { Organisation } from '../../server/models/organisation.js';
import type { Site } from '../../server/models/site.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import {
  buildOrganisation,
  buildPerson,
  buildSite,
  buildUnit,
  signIn,
} from '../support/factories.js';
import { hours, placeUnit } from '../support/histories.js';

const db = useTestDatabase();
const NOW = new Date('2026-03-10T12:00:00.000Z');
const ago = (count: number) => new Date(NOW.getTime() - hours(count));

let [alder, cairn]: Site[] = [];
let owner: Organisation;

beforeEach(async () => {
  alder = await buildSite(db, {
    code: 'ALDER',
    name: 'Alder Bend Yard',
    latitude: 44,
    longitude: -93,
  });
  cairn = await buildSite(db, { code: 'CAIRN', name: 'Cairn', latitude: 46.5, longitude: -91.25 });
  const { RouteEdge, RouteNode } = modelsOf(db.sequelize);
  const node = (code: string, site: Site | null, latitude: number, longitude: number) =>
    RouteNode.create({ code, name: `Node ${code}`, siteId: site?.id ?? null, latitude, longitude });
  const from = await node('ALDER', alder, 44, -93);
  const junction = await node('J1', null, 45, -92);
  const to = await node('CAIRN', cairn, 46.5, -91.25);
  const edge = { line: 'North line', kind: 'rail', railMetres: 140_000 };
  await RouteEdge.create({ ...edge, fromNodeId: from.id, toNodeId: junction.id });
  await RouteEdge.create({
    ...edge,
    fromNodeId: junction.id,
    toNodeId: to.id,
    railMetres: 180_000,
  });
  owner = await buildOrganisation(db);
  const own = (values: Parameters<typeof placeUnit>[2]) => place(owner, values);
  await own({ state: 'onHand', at: ago(5), site: alder });
  await own({ state: 'onHand', at: ago(200), site: alder });
  await own({ at: ago(5), site: alder });
  await own({ at: ago(100), site: alder });
  await own({});
  await place(await buildOrganisation(db), { state: 'onHand', at: ago(5), site: alder });
  await place(null, { at: ago(100), site: alder });
});

async function place(of: Organisation | null, values: Parameters<typeof placeUnit>[2]) {
  const unit = await buildUnit(db, { owner: of, registered: of !== null });
  await placeUnit(db, unit, values);
}

async function mapOf(values: Parameters<typeof buildPerson>[1], query = '') {
  const context = buildContext(db);
  context.clock.set(NOW);
  const agent = await signIn(createApp(context), await buildPerson(db, values));
  const { body } = await agent.get(`/api/map${query}`).expect(200);
  expect(mapAnswer.parse(body)).toEqual(body);
  const features = body.features as (SiteFeature | EdgeFeature)[];
  const sites = features.flatMap((feature) =>
    feature.properties.feature === 'site' ? [feature as SiteFeature] : [],
  );
  const edges = features.flatMap((feature) =>
    feature.properties.feature === 'edge' ? [feature as EdgeFeature] : [],
  );
  const countsAt = (code: string) => {
    const site = sites.find(({ properties }) => properties.code === code);
    const { onHand, enRoute, quiet, pastLimit } = site?.properties ?? {};
    return { onHand, enRoute, quiet, pastLimit };
  };
  return { sites, edges, countsAt };
}

describe('the map', () => {
  test('is GeoJSON: sites as points, longitude first, and the routes between with rail metres', async () => {
    const { sites, edges } = await mapOf({ roles: ['administrator'] });
    expect(sites.map((site) => site.geometry)).toEqual([
      { type: 'Point', coordinates: [-93, 44] },
      { type: 'Point', coordinates: [-91.25, 46.5] },
    ]);
    expect(edges[0]).toMatchObject({
      type: 'Feature',
      geometry: {
        type: 'LineString',
        coordinates: [
          [-93, 44],
          [-92, 45],
        ],
      },
      properties: {
        from: { code: 'ALDER', name: 'Node ALDER' },
        to: { code: 'J1', name: 'Node J1' },
        line: 'North line',
        kind: 'rail',
        railMetres: 140_000,
      },
    });
    expect(edges).toHaveLength(2);
  });

  test('counts an owner’s own cars only', async () => {
    const { countsAt } = await mapOf({ roles: ['owner'], organisation: owner });
    expect(countsAt('ALDER')).toEqual({ onHand: 2, enRoute: 2, quiet: 1, pastLimit: 1 });
    expect(countsAt('CAIRN')).toEqual({ onHand: 0, enRoute: 0, quiet: 0, pastLimit: 0 });
  });

  test('counts every car at the sites of a clerk, and says nothing of the others', async () => {
    const { countsAt } = await mapOf({ roles: ['clerk'], sites: [alder as Site] });
    expect(countsAt('ALDER')).toEqual({ onHand: 3, enRoute: 3, quiet: 1, pastLimit: 1 });
    expect(countsAt('CAIRN')).toEqual({
      onHand: null,
      enRoute: null,
      quiet: null,
      pastLimit: null,
    });
  });

  test('counts a car once for who sees it in two ways', async () => {
    const roles = ['owner' as const, 'clerk' as const];
    const { countsAt } = await mapOf({ roles, organisation: owner, sites: [alder as Site] });
    expect(countsAt('ALDER')).toEqual({ onHand: 3, enRoute: 3, quiet: 1, pastLimit: 1 });
  });

  test('of a box shows the sites in it and the routes that touch it', async () => {
    const { sites, edges } = await mapOf({}, '?bbox=-94,43,-92.5,44.2&zoom=6.5');
    expect(sites.map((site) => site.properties.code)).toEqual(['ALDER']);
    expect(edges.map((edge) => edge.properties.to.code)).toEqual(['J1']);
    const elsewhere = await mapOf({}, '?bbox=170,43,-170,48');
    expect(elsewhere.sites.length + elsewhere.edges.length).toBe(0);
  });

  test.each([
    ['bbox=1,2,3', '?bbox'],
    ['bbox=1,2,3,four', '?bbox'],
    ['bbox=-94,44,-92,43', '?bbox'],
    ['bbox=-200,43,-92,44', '?bbox'],
    ['zoom=99', '?zoom'],
    ['centre=1,2', '?centre'],
  ])('%s is 400 with a pointer', async (query, pointer) => {
    const agent = await signIn(createApp(buildContext(db)), await buildPerson(db));
    const { body } = await agent.get(`/api/map?${query}`).expect(400);
    expect(body.errors).toEqual([{ pointer, detail: expect.any(String) }]);
  });

  test('is not for whoever is not signed in', async () => {
    await request(createApp(buildContext(db)))
      .get('/api/map')
      .expect(401);
  });
});
