import { describe, expect, test } from 'vitest';
import { roles, type Role } from '../../server/contract/common.js';
import { Problem } from '../../server/errors.js';
import { rolesOf, type Actor } from '../../server/policies/actor.js';
import {
  administrationPolicy,
  changes,
  readPointPolicy,
  sitePolicy,
} from '../../server/policies/administration-policy.js';
import { alertPolicy } from '../../server/policies/alert-policy.js';
import { maySeeDoubts } from '../../server/policies/doubt-policy.js';
import { mayReleaseReads, maySeeHeldReads } from '../../server/policies/held-read-policy.js';
import { maySeeMail } from '../../server/policies/mail-policy.js';
import { authorize, authorizeAll, permissions } from '../../server/policies/policy.js';
import { maySeeRebuilds, rebuildPolicy } from '../../server/policies/rebuild-policy.js';

import { passPolicy } from '../../server/policies/pass-policy.js';
import { unitPolicy } from '../../server/policies/unit-policy.js';
import {
  mayNameOwner,
  mayNameSite,
  maySetWatches,
  mayTell,
  watchPolicy,
} from '../../server/policies/watch-policy.js';

const OWN_SITE = 1;
const OTHER_SITE = 2;

const actorWith = (...held: Role[]): Actor => ({
  personId: 1,
  name: 'Ada Quill',
  email: 'ada@tests.example',
  roles: held,
  organisationId: 1,
  siteIds: [OWN_SITE],
  timeZone: 'UTC',
});

/** Which of the four roles may, in the order of `roles`: administrator owner clerk dispatcher. */
const whoMay = (rule: (actor: Actor) => boolean) =>
  roles.map((role) => (rule(actorWith(role)) ? 'yes' : 'no')).join(' ');

describe('who may do what to the configuration', () => {
  const record = {};
  const own = { id: OWN_SITE, siteId: OWN_SITE };
  const other = { id: OTHER_SITE, siteId: OTHER_SITE };

  test.each([
    ['see an organisation', administrationPolicy.see, record, 'yes no no no'],
    ['update an organisation', administrationPolicy.update, record, 'yes no no no'],
    ['delete an organisation', administrationPolicy.delete, record, 'yes no no no'],
    ['see an own site', sitePolicy.see, own, 'yes yes yes yes'],
    ['see another site', sitePolicy.see, other, 'yes yes yes yes'],
    ['see details of an own site', sitePolicy.details, own, 'yes no yes yes'],
    ['see details of another site', sitePolicy.details, other, 'yes no no no'],
    ['update an own site', sitePolicy.update, own, 'yes no no no'],
    ['delete an own site', sitePolicy.delete, own, 'yes no no no'],
    ["replace an own site's token", sitePolicy.replaceToken, own, 'yes no no no'],
    ["see the heartbeat of an own site's reader", sitePolicy.heartbeat, own, 'yes no no no'],
    ['report by eye at an own site', sitePolicy.reportByEye, own, 'yes no yes no'],
    ['report by eye at another site', sitePolicy.reportByEye, other, 'yes no no no'],
    ['see a read point of an own site', readPointPolicy.see, own, 'yes no yes yes'],
    ['see a read point of another site', readPointPolicy.see, other, 'yes no no no'],
    ['update a read point of an own site', readPointPolicy.update, own, 'yes no no no'],
    ['delete a read point of an own site', readPointPolicy.delete, own, 'yes no no no'],
  ])('%s', (_what, rule, subject, expected) => {
    expect(
      whoMay((actor) => (rule as (actor: Actor, subject: object) => boolean)(actor, subject)),
    ).toBe(expected);
  });

  test('nobody without a role', () => {
    expect(sitePolicy.details(actorWith(), own)).toBe(false);
    expect(administrationPolicy.see(actorWith(), record)).toBe(false);
  });

  test('one person with two roles may what either may', () => {
    expect(sitePolicy.details(actorWith('owner', 'clerk'), own)).toBe(true);
  });
});

describe('who may do what with units, watches, alerts and mail', () => {
  const mine = { personId: 1, peopleIds: [] };
  const tellsMe = { personId: 2, peopleIds: [1] };
  const strange = { personId: 2, peopleIds: [3] };
  const listed = { access: { isListed: true } };
  const once = { access: { isListed: false } };

  test.each<[string, (actor: Actor) => boolean, string]>([
    ['see a unit found for them', (actor) => unitPolicy.see(actor, once), 'yes yes yes yes'],
    ['see a unit not found', (actor) => unitPolicy.see(actor, { access: null }), 'no no no no'],
    ['watch a unit of their list', (actor) => unitPolicy.watch(actor, listed), 'yes yes yes yes'],
    ['watch a unit that was there once', (actor) => unitPolicy.watch(actor, once), 'no no no no'],
    ['see a pass of theirs', (actor) => passPolicy.see(actor, { named: 1 }), 'yes yes yes yes'],
    ['see a pass of others', (actor) => passPolicy.see(actor, { named: 0 }), 'no no no no'],
    ['see a pass at their site', (a) => passPolicy.see(a, { named: null }), 'yes yes yes yes'],
    ['set watches', maySetWatches, 'yes yes yes yes'],
    ['see their own watch', (actor) => watchPolicy.see(actor, mine), 'yes yes yes yes'],
    ['change their own watch', (actor) => watchPolicy.update(actor, mine), 'yes yes yes yes'],
    ['see a watch that tells them', (actor) => watchPolicy.see(actor, tellsMe), 'yes yes yes yes'],
    [
      'change a watch that tells them',
      (actor) => watchPolicy.update(actor, tellsMe),
      'yes no no no',
    ],
    ['end a watch that tells them', (actor) => watchPolicy.delete(actor, tellsMe), 'yes no no no'],
    ["see a stranger's watch", (actor) => watchPolicy.see(actor, strange), 'yes no no no'],
    ['name their own organisation', (actor) => mayNameOwner(actor, 1), 'yes yes yes yes'],
    ['name another organisation', (actor) => mayNameOwner(actor, 2), 'yes no yes yes'],
    ['name an own site', (actor) => mayNameSite(actor, OWN_SITE), 'yes yes yes yes'],
    ['name another site', (actor) => mayNameSite(actor, OTHER_SITE), 'yes yes no no'],
    ['tell themselves', (actor) => mayTell(actor, { id: 1, organisationId: 2 }), 'yes yes yes yes'],
    [
      'tell a colleague',
      (actor) => mayTell(actor, { id: 2, organisationId: 1 }),
      'yes yes yes yes',
    ],
    ['tell a stranger', (actor) => mayTell(actor, { id: 2, organisationId: 2 }), 'yes no no no'],
    [
      'take an alert that tells them',
      (actor) => alertPolicy.acknowledge(actor, { state: 'open', watch: tellsMe }),
      'yes yes yes yes',
    ],
    [
      "take a stranger's alert",
      (actor) => alertPolicy.acknowledge(actor, { state: 'open', watch: strange }),
      'yes no no no',
    ],
    ['see the mail that went out', maySeeMail, 'yes no no no'],
    ['see reads that are set aside', maySeeHeldReads, 'yes no no no'],
    ['see which sightings fit no train', maySeeDoubts, 'yes no no no'],
    ['release reads', mayReleaseReads, 'yes no no no'],
    ['see what is made anew', maySeeRebuilds, 'yes no no no'],
    ['stop what waits', (actor) => rebuildPolicy.stop(actor, { state: 'waiting' }), 'yes no no no'],
    ['stop what runs', (actor) => rebuildPolicy.stop(actor, { state: 'running' }), 'yes no no no'],
    ['stop what is done', (actor) => rebuildPolicy.stop(actor, { state: 'done' }), 'no no no no'],
    [
      'resume what is stopped',
      (actor) => rebuildPolicy.resume(actor, { state: 'stopped' }),
      'yes no no no',
    ],
    [
      'resume what runs',
      (actor) => rebuildPolicy.resume(actor, { state: 'running' }),
      'no no no no',
    ],
  ])('%s', (_what, rule, expected) => {
    expect(whoMay(rule)).toBe(expected);
  });
});

describe('authorize', () => {
  const status = (act: () => void) => {
    try {
      act();
      return 200;
    } catch (error) {
      return error instanceof Problem ? error.status : error;
    }
  };
  const clerk = actorWith('clerk');

  test('answers 404 for what is not there or not to be seen, 403 for what may not be done', () => {
    const own = { siteId: OWN_SITE };
    const other = { siteId: OTHER_SITE };
    expect(status(() => authorize(clerk, readPointPolicy, 'see', own))).toBe(200);
    expect(status(() => authorize(clerk, readPointPolicy, 'update', own))).toBe(403);
    expect(status(() => authorize(clerk, readPointPolicy, 'see', other))).toBe(404);
    expect(status(() => authorize(clerk, readPointPolicy, 'update', other))).toBe(404);
    expect(status(() => authorize(clerk, readPointPolicy, 'update', null))).toBe(404);
    expect(status(() => authorize(clerk, readPointPolicy, 'see', undefined))).toBe(404);
  });

  test('answers 403 for a whole collection', () => {
    expect(status(() => authorizeAll(clerk, () => false))).toBe(403);
    expect(status(() => authorizeAll(clerk, () => true))).toBe(200);
  });

  test('tells as `can` what it would let through', () => {
    const record = { siteId: OWN_SITE };
    expect(permissions(clerk, readPointPolicy, changes, record)).toEqual({
      update: false,
      delete: false,
    });
    expect(permissions(actorWith('administrator'), readPointPolicy, changes, record)).toEqual({
      update: true,
      delete: true,
    });
  });
});

test('roles are read as they are stored, unknown ones left out', () => {
  expect(rolesOf('dispatcher,owner')).toEqual(['owner', 'dispatcher']);
  expect(rolesOf('king,clerk,administrators')).toEqual(['clerk']);
  expect(rolesOf('')).toEqual([]);
});
