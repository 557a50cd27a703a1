import { forbidden, notFound } from '../errors.js';
import type { Actor } from './actor.js';

type Rule<Subject> = (actor: Actor, record: Subject) => boolean;

/** Yes or no for each act on a kind of record; `see` decides between 404 and 403. */
export type Policy<Subject, Act extends string = never> = Record<'see' | Act, Rule<Subject>>;

/**
 * Throws unless the actor may do `act` to the record: 404 when they may not even see it
 * (or there is none), 403 when they see it but may not act.
 */
export function authorize<Subject, Act extends string>(
  actor: Actor,
  policy: Policy<Subject, Act>,
  act: 'see' | Act,
  record: Subject | null | undefined,
): asserts record is Subject {
  if (record === null || record === undefined || !policy.see(actor, record)) throw notFound();
  if (!policy[act](actor, record)) throw forbidden();
}

/** The answers that go out as `can`, so that the client never works out a right by itself. */
export function permissions<Subject, Act extends string>(
  actor: Actor,
  policy: Policy<Subject, Act>,
  acts: readonly Act[],
  record: Subject,
): Record<Act, boolean> {
  const entries = acts.map((act) => [act, policy[act](actor, record)] as const);
  return Object.fromEntries(entries) as Record<Act, boolean>;
}

/** Throws 403 unless the actor may do this to the collection as a whole. */
export function authorizeAll(actor: Actor, rule: (actor: Actor) => boolean): void {
  if (!rule(actor)) throw forbidden('Your role does not include this.');
}
