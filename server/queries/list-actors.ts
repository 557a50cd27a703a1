import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';
import { rolesOf, type Actor } from '../policies/actor.js';

/**
 * People as actors, by id, for work done on their behalf without a session. Unknown ids are left
 * out.
 */
export async function listActors(db: Database, personIds: number[]): Promise<Map<number, Actor>> {
  if (personIds.length === 0) return new Map();
  const { Person, PersonSite } = modelsOf(db.sequelize);
  const ids = [...new Set(personIds)];
  const [people, places] = await Promise.all([
    Person.findAll({
      where: { id: ids },
      attributes: ['id', 'name', 'email', 'roles', 'organisationId', 'timeZone'],
    }),
    PersonSite.findAll({ where: { personId: ids }, attributes: ['personId', 'siteId'] }),
  ]);
  const siteIds = new Map<number, number[]>();
  for (const { personId, siteId } of places) {
    siteIds.set(personId, [...(siteIds.get(personId) ?? []), siteId]);
  }
  return new Map(
    people.map((person) => [
      person.id,
      {
        personId: person.id,
        name: person.name,
        email: person.email,
        roles: rolesOf(person.roles),
        organisationId: person.organisationId,
        siteIds: siteIds.get(person.id) ?? [],
        timeZone: person.timeZone,
      },
    ]),
  );
}
