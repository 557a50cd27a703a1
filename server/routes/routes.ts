import { Router } from 'express';
import { z } from 'zod';
import { recordOf, routeEdgeView, routeNodeView } from '../contract/administration-answers.js';
import {
  batchOfSchema,
  codeParams,
  idParams,
  routeEdgeInput,
  routeNodeInput,
  routesInput,
} from '../contract/administration.js';
import { dataOf, pageOf, pageQuery } from '../contract/common.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { administrationBody } from '../middleware/administration-body.js';
import { requireAdministrator } from '../middleware/require-role.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { restorePointers, sortRoutesBody } from '../middleware/routes-body.js';
import { validate, validated } from '../middleware/validate.js';
import { administrationPolicy, changes } from '../policies/administration-policy.js';
import { authorize, permissions } from '../policies/policy.js';
import { presentRouteEdge, presentRouteNode } from '../presenters/administration.js';
import {
  findRouteEdge,
  findRouteEdgesByEnds,
  findRouteNodes,
  listRouteEdges,
  listRouteNodes,
} from '../queries/list-routes.js';
import { removeRouteEdge } from '../services/remove-route-edge.js';
import { removeRouteNode } from '../services/remove-route-node.js';
import { upsertRoutes } from '../services/upsert-routes.js';

const list = { query: pageQuery };
const store = { body: routesInput };
const oneNode = { params: codeParams };
const oneEdge = { params: idParams };

/** The route graph: nodes are sites and junctions, edges the lines between them. */
export function routesRoutes(context: Context): Router {
  const { db } = context;
  const router = Router();
  const signedIn = requireUser(context);

  router.get(
    '/routes',
    signedIn,
    requireAdministrator,
    validate(list),
    async (request, response) => {
      const { rows, next } = await listRouteEdges(db, validated(request, list).query);
      response.json({ data: rows.map(presentRouteEdge), next });
    },
  );

  router.post(
    '/routes',
    signedIn,
    requireAdministrator,
    administrationBody,
    sortRoutesBody,
    validate(store),
    async (request, response) => {
      const { body } = validated(request, store);
      await upsertRoutes(db, body, actorOf(request).personId);
      const nodes = await findRouteNodes(
        db,
        body.nodes.map(({ code }) => code),
      );
      const edges = await findRouteEdgesByEnds(db, body.edges);
      response.json({
        data: {
          nodes: nodes.rows.map((node) => presentRouteNode(node, nodes.codes)),
          edges: edges.map(presentRouteEdge),
        },
      });
    },
  );

  router.get(
    '/routes/nodes',
    signedIn,
    requireAdministrator,
    validate(list),
    async (request, response) => {
      const { rows, codes, next } = await listRouteNodes(db, validated(request, list).query);
      response.json({ data: rows.map((node) => presentRouteNode(node, codes)), next });
    },
  );

  router.get('/routes/nodes/:code', signedIn, validate(oneNode), async (request, response) => {
    const { rows, codes } = await findRouteNodes(db, [validated(request, oneNode).params.code]);
    const [node] = rows;
    authorize(actorOf(request), administrationPolicy, 'see', node);
    const can = permissions(actorOf(request), administrationPolicy, changes, node);
    response.json({ data: presentRouteNode(node, codes), can });
  });

  router.delete('/routes/nodes/:code', signedIn, validate(oneNode), async (request, response) => {
    const { rows } = await findRouteNodes(db, [validated(request, oneNode).params.code]);
    const [node] = rows;
    authorize(actorOf(request), administrationPolicy, 'delete', node);
    await removeRouteNode(db, node.id);
    response.status(204).end();
  });

  router.get('/routes/edges/:id', signedIn, validate(oneEdge), async (request, response) => {
    const edge = await findRouteEdge(db, validated(request, oneEdge).params.id);
    authorize(actorOf(request), administrationPolicy, 'see', edge);
    const can = permissions(actorOf(request), administrationPolicy, changes, edge);
    response.json({ data: presentRouteEdge(edge), can });
  });

  router.delete('/routes/edges/:id', signedIn, validate(oneEdge), async (request, response) => {
    const edge = await findRouteEdge(db, validated(request, oneEdge).params.id);
    authorize(actorOf(request), administrationPolicy, 'delete', edge);
    await removeRouteEdge(db, edge.id, actorOf(request).personId);
    response.status(204).end();
  });

  router.use(restorePointers);
  return router;
}

export const routesOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/routes',
    summary: 'List edges of the route graph',
    query: pageQuery,
    response: pageOf(routeEdgeView),
  },
  {
    method: 'post',
    path: '/api/routes',
    summary: 'Store nodes by code and edges by ends and line, all or none',
    body: z.union([routesInput, batchOfSchema(z.union([routeNodeInput, routeEdgeInput]))]),
    response: dataOf(z.object({ nodes: z.array(routeNodeView), edges: z.array(routeEdgeView) })),
  },
  {
    method: 'get',
    path: '/api/routes/nodes',
    summary: 'List nodes of the route graph by code',
    query: pageQuery,
    response: pageOf(routeNodeView),
  },
  {
    method: 'get',
    path: '/api/routes/nodes/:code',
    summary: 'Show a node of the route graph',
    params: codeParams,
    response: recordOf(routeNodeView),
  },
  {
    method: 'delete',
    path: '/api/routes/nodes/:code',
    summary: 'Remove a junction without edges',
    params: codeParams,
  },
  {
    method: 'get',
    path: '/api/routes/edges/:id',
    summary: 'Show an edge of the route graph',
    params: idParams,
    response: recordOf(routeEdgeView),
  },
  {
    method: 'delete',
    path: '/api/routes/edges/:id',
    summary: 'Remove an edge of the route graph',
    params: idParams,
  },
];
