import { DEFAULT_WATCH_HOURS, WATCH_LIMITS, type WatchInput } from '../contract/watches.js';
import { conflict, invalid } from '../errors.js';
import type { Context } from '../lib/context.js';
import { inTransaction } from '../lib/in-transaction.js';
import { modelsOf } from '../models/index.js';
import type { Actor } from '../policies/actor.js';
import { countWatches } from '../queries/find-watches.js';
import { resolveRecipients } from './resolve-recipients.js';
import { resolveScope } from './resolve-scope.js';

/**
 * Keeps a watch of this person and answers its id. Without recipients it tells the person. 400
 * names everything in scope and recipients that is not for them.
 */
export async function setWatch(
  { db, clock }: Context,
  actor: Actor,
  input: WatchInput,
): Promise<number> {
  const now = clock.now();
  if ((await countWatches(db, actor.personId)) >= WATCH_LIMITS.perPerson) {
    throw conflict(`You have ${WATCH_LIMITS.perPerson} watches; end one first.`);
  }
  const { scope, faults } = await resolveScope(db, actor, input.scope, now);
  const told = await resolveRecipients(
    db,
    actor,
    input.recipients ?? { people: [actor.personId], addresses: [] },
  );
  const allFaults = [...faults, ...told.faults];
  if (allFaults.length > 0) throw invalid('The watch names what is not for you.', allFaults);
  const { Watch, WatchPerson } = modelsOf(db.sequelize);
  return inTransaction(db.sequelize, async (transaction) => {
    const watch = await Watch.create(
      {
        personId: actor.personId,
        name: input.name,
        kind: input.kind,
        scope,
        addresses: told.recipients.addresses,
        schedule: input.schedule,
        includeOnHand: input.kind === 'quiet' && input.includeOnHand,
        hours: input.hours ?? DEFAULT_WATCH_HOURS[input.kind],
        createdAt: now,
      },
      { transaction },
    );
    const rows = told.recipients.people.map((personId) => ({ watchId: watch.id, personId }));
    await WatchPerson.bulkCreate(rows, { transaction });
    return watch.id;
  });
}
