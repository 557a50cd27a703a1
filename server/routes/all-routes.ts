import type { Router } from 'express';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { alertsOperations, alertsRoutes } from './alerts.js';
import { antennasOperations, antennasRoutes } from './antennas.js';
import { demoCasesOperations } from './demo-cases.js';
import { demoMailboxOperations, demoMailboxRoutes } from './demo-mailbox.js';
import { doubtsOperations, doubtsRoutes } from './doubts.js';
import { equipmentOperations, equipmentRoutes } from './equipment.js';
import { eventsOperations, eventsRoutes } from './events.js';
import { fleetOperations, fleetRoutes } from './fleet.js';
import { handReportsOperations, handReportsRoutes } from './hand-reports.js';
import { healthOperations } from './health.js';
import { heldReadsOperations, heldReadsRoutes } from './held-reads.js';
import { ingestHeartbeatOperations } from './ingest-heartbeat.js';
import { ingestReportsOperations } from './ingest-reports.js';
import { ingestOperations } from './ingest.js';
import { lookUpOperations, lookUpRoutes } from './look-up.js';
import { mailOperations, mailRoutes } from './mail.js';
import { mapOperations, mapRoutes } from './map.js';
import { metricsOperations } from './metrics.js';
import { openapiOperations } from './openapi.js';
import { organisationsOperations, organisationsRoutes } from './organisations.js';
import { passesOperations, passesRoutes } from './passes.js';
import { peopleOperations, peopleRoutes } from './people.js';
import { readPointsOperations, readPointsRoutes } from './read-points.js';
import { rebuildsOperations, rebuildsRoutes } from './rebuilds.js';
import { registerOperations, registerRoutes } from './register.js';
import { routesOperations, routesRoutes } from './routes.js';
import { sessionOperations } from './session.js';
import { sitesOperations, sitesRoutes } from './sites.js';
import { watchesOperations, watchesRoutes } from './watches.js';

/** Routes that read large bodies of their own, after the sign-in. */
export function administrationRouters(context: Context): Router[] {
  return [
    organisationsRoutes(context),
    peopleRoutes(context),
    sitesRoutes(context),
    readPointsRoutes(context),
    antennasRoutes(context),
    routesRoutes(context),
    registerRoutes(context),
  ];
}

/** Routes behind the screens; their bodies are small. */
export function portalRouters(context: Context, projectorLagMs: () => Promise<number>): Router[] {
  return [
    equipmentRoutes(context),
    handReportsRoutes(context),
    fleetRoutes(context, projectorLagMs),
    passesRoutes(context),
    doubtsRoutes(context),
    mapRoutes(context),
    lookUpRoutes(context),
    eventsRoutes(context),
    watchesRoutes(context),
    alertsRoutes(context),
    mailRoutes(context),
    rebuildsRoutes(context),
    heldReadsRoutes(context),
    demoMailboxRoutes(context),
  ];
}

/** Every route of the interface, as /api/openapi.json tells it. */
export const allOperations: Operation[] = [
  ...healthOperations,
  ...metricsOperations,
  ...openapiOperations,
  ...sessionOperations,
  ...ingestOperations,
  ...ingestReportsOperations,
  ...ingestHeartbeatOperations,
  ...equipmentOperations,
  ...handReportsOperations,
  ...fleetOperations,
  ...passesOperations,
  ...doubtsOperations,
  ...mapOperations,
  ...lookUpOperations,
  ...eventsOperations,
  ...watchesOperations,
  ...alertsOperations,
  ...mailOperations,
  ...rebuildsOperations,
  ...heldReadsOperations,
  ...demoMailboxOperations,
  ...demoCasesOperations,
  ...organisationsOperations,
  ...peopleOperations,
  ...sitesOperations,
  ...readPointsOperations,
  ...antennasOperations,
  ...routesOperations,
  ...registerOperations,
];
