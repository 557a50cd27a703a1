import { aarIdentity } from '../../server/domain/identifiers/identity.js';
import { evaluateWatches } from '../../server/jobs/evaluate-watches.js';
import type { Database } from '../../server/lib/database.js';
import type { buildContext } from './context.js';
import { buildOrganisation, buildPerson, buildSite, buildUnit } from './factories.js';
import { placeUnit } from './places.js';
import { buildWatch } from './watches.js';

const HOUR_MS = 3_600_000;

/** An owner whose two cars have gone quiet; the watch has just noticed, and one mail is to go. */
export async function buildQuietCars(
  db: Database,
  context: ReturnType<typeof buildContext>,
): Promise<void> {
  const organisation = await buildOrganisation(db);
  const person = await buildPerson(db, { roles: ['owner'], organisation });
  const site = await buildSite(db);
  for (const number of [40127, 40128]) {
    const unit = await buildUnit(db, {
      owner: organisation,
      identity: aarIdentity('QTKX', number),
    });
    const at = new Date(context.clock.now().getTime() - 100 * HOUR_MS);
    await placeUnit(db, unit, { state: 'enRoute', site, at });
  }
  await buildWatch(db, person, { createdAt: new Date(context.clock.now().getTime() - HOUR_MS) });
  await evaluateWatches(context);
}
