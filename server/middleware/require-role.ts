import type { RequestHandler } from 'express';
import { isAdministrator } from '../policies/actor.js';
import { authorizeAll } from '../policies/policy.js';
import { actorOf } from './require-user.js';

/** Lets only administrators pass, before the body is read; stands after `requireUser`. */
export const requireAdministrator: RequestHandler = (request, _response, next) => {
  authorizeAll(actorOf(request), isAdministrator);
  next();
};
