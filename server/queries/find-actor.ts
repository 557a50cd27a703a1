import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';
import { rolesOf, type Actor } from '../policies/actor.js';

/** The person behind a session that is neither ended nor expired; else null. */
export async function findActor(db: Database, sessionId: string, now: Date): Promise<Actor | null> {
  const { Session, Person, Site } = modelsOf(db.sequelize);
  const session = await Session.findByPk(sessionId, {
    include: [
      {
        model: Person,
        as: 'person',
        attributes: ['id', 'name', 'email', 'roles', 'organisationId', 'timeZone'],
        include: [{ model: Site, as: 'sites', attributes: ['id'], through: { attributes: [] } }],
      },
    ],
  });
  if (!session?.person || session.endedAt !== null || session.expiresAt <= now) return null;
  const { person } = session;
  return {
    personId: person.id,
    name: person.name,
    email: person.email,
    roles: rolesOf(person.roles),
    organisationId: person.organisationId,
    siteIds: (person.sites ?? []).map((site) => site.id),
    timeZone: person.timeZone,
  };
}
