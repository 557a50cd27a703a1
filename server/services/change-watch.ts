import type { WatchChange } from '../contract/watches.js';
import { invalid } from '../errors.js';
import type { Context } from '../lib/context.js';
import { inTransaction } from '../lib/in-transaction.js';
import { modelsOf } from '../models/index.js';
import type { Actor } from '../policies/actor.js';
import { listActors } from '../queries/list-actors.js';
import { resolveRecipients } from './resolve-recipients.js';
import { resolveScope } from './resolve-scope.js';

/**
 * Changes a watch; the next evaluation raises and clears what follows from it. Scope and
 * recipients are checked with the eyes of the person who set the watch, whoever changes it.
 */
export async function changeWatch(
  { db, clock }: Context,
  watch: { id: number; personId: number; kind: string },
  change: WatchChange,
): Promise<void> {
  const owner = (await listActors(db, [watch.personId])).get(watch.personId);
  if (!owner) throw new Error(`Watch ${watch.id} belongs to nobody.`);
  const { scope, recipients } = await resolve(db, owner, change, clock.now());
  const { Watch, WatchPerson } = modelsOf(db.sequelize);
  await inTransaction(db.sequelize, async (transaction) => {
    await Watch.update(
      {
        ...(change.name === undefined ? {} : { name: change.name }),
        ...(change.hours === undefined ? {} : { hours: change.hours }),
        ...(change.schedule ? { schedule: change.schedule } : {}),
        ...(change.includeOnHand === undefined
          ? {}
          : { includeOnHand: watch.kind === 'quiet' && change.includeOnHand }),
        ...(scope ? { scope } : {}),
        ...(recipients ? { addresses: recipients.addresses } : {}),
      },
      { where: { id: watch.id }, transaction },
    );
    if (!recipients) return;
    await WatchPerson.destroy({ where: { watchId: watch.id }, transaction });
    const rows = recipients.people.map((personId) => ({ watchId: watch.id, personId }));
    await WatchPerson.bulkCreate(rows, { transaction });
  });
}

async function resolve(db: Context['db'], owner: Actor, change: WatchChange, now: Date) {
  const scope = change.scope && (await resolveScope(db, owner, change.scope, now));
  const told = change.recipients && (await resolveRecipients(db, owner, change.recipients));
  const faults = [...(scope?.faults ?? []), ...(told?.faults ?? [])];
  if (faults.length > 0) throw invalid('The watch names what is not for you.', faults);
  return { scope: scope?.scope, recipients: told?.recipients };
}
