import type { ProblemFault } from '../errors.js';
import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';
import type { Actor } from '../policies/actor.js';
import { mayTell } from '../policies/watch-policy.js';

/** Whom a watch tells; each person and address once. */
export interface Recipients {
  people: number[];
  addresses: string[];
}

/** Checks whom a person wants told. Faults have pointers below `/recipients`. */
export async function resolveRecipients(
  db: Database,
  actor: Actor,
  wanted: Recipients,
): Promise<{ recipients: Recipients; faults: ProblemFault[] }> {
  const { Person } = modelsOf(db.sequelize);
  const found = await Person.findAll({
    where: { id: wanted.people },
    attributes: ['id', 'organisationId'],
  });
  const mayBeTold = new Set(
    found.filter((person) => mayTell(actor, person)).map((person) => person.id),
  );
  return {
    recipients: {
      people: [...new Set(wanted.people)],
      addresses: [...new Set(wanted.addresses.map((address) => address.toLowerCase()))],
    },
    faults: wanted.people.flatMap((id, index) =>
      mayBeTold.has(id)
        ? []
        : { pointer: `/recipients/people/${index}`, detail: 'is not one whom you may have told' },
    ),
  };
}
