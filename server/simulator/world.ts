/**
 * The one description of the invented region that the demo shows: who is there, which sites and
 * read points stand on which routes, and everything that rolls. Seeders and simulator read it.
 */
import { units } from './world/equipment.js';
import { DEMO_PASSWORD, organisations, people, tellers } from './world/organisations.js';
import { readPoints } from './world/read-points.js';
import { edges, nodes } from './world/routes.js';
import { sites } from './world/sites.js';
import { tagSpellsAt } from './world/tag-spells.js';
import { towardOf } from './world/toward.js';
import { branchCars } from './world/branch-cars.js';

export const world = {
  organisations,
  people,
  tellers,
  password: DEMO_PASSWORD,
  sites,
  readPoints,
  nodes,
  edges,
  units,
  branchCars,
  tagSpellsAt,
  towardOf,
};
export type { DemoTag, DemoUnit } from './world/equipment.js';
export type { DemoAntenna, DemoReadPoint } from './world/read-points.js';
export type { DemoSite } from './world/sites.js';
