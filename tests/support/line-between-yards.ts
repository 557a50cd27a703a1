import type { Agent } from 'supertest';

const place = { latitude: 45, longitude: -93, timeZone: 'UTC' };

/** What a script sends for a yard of that code. */
export const yard = (code: string) => ({ code, name: code, kind: 'yard', ...place });

const edge = (from: string, to: string) => ({
  from,
  to,
  railMetres: 40_000,
  kind: 'rail',
  line: 'Main',
});

/** A read point on the open line. */
export const onLine = {
  site: 'LINE',
  code: 'M',
  name: 'Main track',
  kind: 'line',
  decreasingPlace: null,
  increasingPlace: null,
};

/** The same between the open line and its site. */
export const lead = { ...onLine, code: 'N', increasingPlace: { site: 'LINE' } };

/** Enters: west yard – 40 km – a fork – 40 km – a point on the line – 40 km – east yard. */
export async function enterLine(admin: Agent): Promise<void> {
  const sites = [yard('WEST'), { ...yard('LINE'), kind: 'line' }, yard('EAST')];
  await admin.post('/api/sites').send(sites).expect(200);
  const nodes = [{ code: 'FORK', name: 'Fork', latitude: 45, longitude: -93 }];
  const edges = [edge('WEST', 'FORK'), edge('FORK', 'LINE'), edge('LINE', 'EAST')];
  await admin.post('/api/routes').send({ nodes, edges }).expect(200);
}

/** The lines of a read point as they are answered. */
export interface Lines {
  decreasingToward: string[];
  increasingToward: string[];
}

/** Stores a read point, and gives back its lines. */
export async function storePoint(admin: Agent, point: object): Promise<Lines> {
  const { body } = await admin.post('/api/read-points').send(point).expect(200);
  const { decreasingToward, increasingToward } = body.data;
  return { decreasingToward, increasingToward };
}
