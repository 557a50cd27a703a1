import { jsonBody } from './json-body.js';

/** The body of an upsert: up to 5,000 items. Read only after `requireUser` and the role. */
export const administrationBody = jsonBody(4_000_000);
