import { Router } from 'express';
import { lookUpAnswer, lookUpQuery } from '../contract/look-up.js';
import { parseUnit } from '../domain/identifiers/parse-unit.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { validate, validated } from '../middleware/validate.js';
import { presentSiteHit, presentUnitHit } from '../presenters/look-up.js';
import { lookUpSites, lookUpUnits } from '../queries/look-up.js';

const lookUp = { query: lookUpQuery };

/** What the one look-up field asks. */
export function lookUpRoutes(context: Context): Router {
  const { db, clock } = context;
  const router = Router();

  router.get('/look-up', requireUser(context), validate(lookUp), async (request, response) => {
    const { q } = validated(request, lookUp).query;
    const actor = actorOf(request);
    const [units, sites] = await Promise.all([
      lookUpUnits(db, actor, q, clock.now()),
      lookUpSites(db, actor, q),
    ]);
    const hits = [...units.map(presentUnitHit), ...sites.map(presentSiteHit)];
    response.json({ data: { hits, problem: hits.length > 0 ? null : problemWith(q) } });
  });

  return router;
}

/** Why nothing was found: a fault in the number itself goes before a plain no. */
function problemWith(text: string): string {
  const parsed = parseUnit(text);
  const isNumber = /[0-9]/.test(text);
  return parsed.kind === 'wrong' && isNumber
    ? parsed.detail
    : `Nothing that you may see goes by “${text}”.`;
}

export const lookUpOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/look-up',
    summary: 'Find a car, box or site by a number, a mark, a name or a part of one',
    query: lookUpQuery,
    response: lookUpAnswer,
  },
];
