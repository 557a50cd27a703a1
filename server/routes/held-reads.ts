import { Router } from 'express';
import { pageQuery } from '../contract/common.js';
import {
  heldListAnswer,
  heldReadsAnswer,
  heldReadsQuery,
  heldTagsAnswer,
  heldTagsQuery,
  releaseAnswer,
  releaseInput,
} from '../contract/held-reads.js';
import { invalid } from '../errors.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { validate, validated } from '../middleware/validate.js';
import { mayReleaseReads, maySeeHeldReads } from '../policies/held-read-policy.js';
import { authorizeAll } from '../policies/policy.js';
import { presentHeldGroup, presentHeldRead, presentHeldTag } from '../presenters/held-read.js';
import { findReferences } from '../queries/find-references.js';
import { siteIdsByCode } from '../queries/ids-by-code.js';
import { countHeld, listHeldGroups } from '../queries/list-held-groups.js';
import { listHeldReads } from '../queries/list-held-reads.js';
import { listHeldTags } from '../queries/list-held-tags.js';
import { releaseHeldReads, type ReleaseOf } from '../services/release-held-reads.js';

const groups = { query: pageQuery };
const reads = { query: heldReadsQuery };
const tags = { query: heldTagsQuery };
const release = { body: releaseInput };

/** Reads that are stored but set aside, and the release of those whose clock was ahead. */
export function heldReadsRoutes(context: Context): Router {
  const { db, clock } = context;
  const router = Router();
  const user = requireUser(context);

  router.get('/held-reads', user, validate(groups), async (request, response) => {
    authorizeAll(actorOf(request), maySeeHeldReads);
    const [{ rows, next }, counts] = await Promise.all([
      listHeldGroups(db, validated(request, groups).query, clock.now()),
      countHeld(db),
    ]);
    response.json({ data: rows.map(presentHeldGroup), next, counts });
  });

  router.get('/held-reads/reads', user, validate(reads), async (request, response) => {
    authorizeAll(actorOf(request), maySeeHeldReads);
    const { query } = validated(request, reads);
    const { siteId } = await findReferences(db, { site: query.site });
    const { rows, next } = await listHeldReads(db, siteId, query);
    response.json({ data: rows.map(presentHeldRead), next });
  });

  router.get('/held-reads/tags', user, validate(tags), async (request, response) => {
    authorizeAll(actorOf(request), maySeeHeldReads);
    const { rows, next } = await listHeldTags(db, validated(request, tags).query);
    response.json({ data: rows.map(presentHeldTag), next });
  });

  router.post('/held-reads/release', user, validate(release), async (request, response) => {
    const actor = actorOf(request);
    authorizeAll(actor, mayReleaseReads);
    const { site, until } = validated(request, release).body;
    const which = { ...(await siteOf(context, site)), until };
    response.json({ data: { released: await releaseHeldReads(context, actor, which) } });
  });

  return router;
}

async function siteOf({ db }: Context, code: string | undefined): Promise<ReleaseOf> {
  if (code === undefined) return {};
  const siteId = (await siteIdsByCode(db, [code])).get(code);
  if (siteId !== undefined) return { siteId };
  throw invalid('The site is not known.', [
    { pointer: '/site', detail: 'is not the code of a site' },
  ]);
}

export const heldReadsOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/held-reads',
    summary: 'List what is set aside by site and reason, with a sample of each (administrator)',
    query: pageQuery,
    response: heldListAnswer,
  },
  {
    method: 'get',
    path: '/api/held-reads/reads',
    summary: 'List the reads set aside for one reason, latest first (administrator)',
    query: heldReadsQuery,
    response: heldReadsAnswer,
  },
  {
    method: 'get',
    path: '/api/held-reads/tags',
    summary: 'List the tags whose reads are set aside for one reason (administrator)',
    query: heldTagsQuery,
    response: heldTagsAnswer,
  },
  {
    method: 'post',
    path: '/api/held-reads/release',
    summary:
      'Release reads whose clock was ahead: they are used from now on, for good (administrator)',
    body: releaseInput,
    response: releaseAnswer,
  },
];
