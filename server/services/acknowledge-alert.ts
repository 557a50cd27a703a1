import { conflict } from '../errors.js';
import type { Context } from '../lib/context.js';
import { modelsOf } from '../models/index.js';
import type { Actor } from '../policies/actor.js';
import type { AlertRecord } from '../presenters/alert.js';

/**
 * Takes an alert for this person. Whoever was first keeps it, so a repeat changes nothing; one
 * that has cleared can no longer be taken (409).
 */
export async function acknowledgeAlert(
  { db, clock, liveEvents }: Context,
  actor: Actor,
  alert: Pick<AlertRecord, 'id'>,
): Promise<void> {
  const { Alert } = modelsOf(db.sequelize);
  const [changed] = await Alert.update(
    { state: 'acknowledged', acknowledgedAt: clock.now(), acknowledgedBy: actor.personId },
    { where: { id: alert.id, state: 'open' } },
  );
  if (changed === 1) {
    liveEvents.publish({ alerts: true });
    return;
  }
  const present = await Alert.findByPk(alert.id, { attributes: ['state'] });
  if (present?.state !== 'acknowledged') throw conflict('This alert has cleared meanwhile.');
}
