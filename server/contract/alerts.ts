import { z } from 'zod';
import { watchKinds } from './watches.js';

/** States an alert can be in so far; put off and done come later. */
export const alertStates = ['open', 'acknowledged', 'cleared'] as const;
export type AlertState = (typeof alertStates)[number];

/**
 * Why an alert cleared: read again; left the site; what the watch asks for changed (also: the
 * person may no longer see it); the watch ended.
 */
export const clearedBecause = ['read', 'left', 'changed', 'ended'] as const;
export type ClearedBecause = (typeof clearedBecause)[number];

export const alertListQuery = z.strictObject({
  state: z.enum(alertStates).default('open'),
  watch: z.coerce.number().int().positive().optional().meta({ description: 'Id of one watch' }),
  unit: z.string().trim().min(1).max(24).optional().meta({ description: 'One compact identity' }),
  limit: z.coerce.number().int().min(1).max(200).default(50),
  cursor: z.string().max(400).optional(),
});
export type AlertListQuery = z.infer<typeof alertListQuery>;

export const alertParams = z.object({ id: z.coerce.number().int().positive() });

const instant = z.iso.datetime();

/**
 * An alert with the facts it stands on. `since` is the last read (quiet) or the begin of the stay
 * (dwell; with `atLeast` it was there before). `overSince`: the instant the limit ran out.
 */
export const alertView = z
  .object({
    id: z.number(),
    state: z.enum(alertStates),
    kind: z.enum(watchKinds),
    watch: z.object({ id: z.number(), name: z.string() }),
    unitId: z.string(),
    display: z.string(),
    unitKind: z.string(),
    carType: z.string().nullable(),
    site: z.object({ code: z.string(), name: z.string() }).nullable(),
    since: instant,
    atLeast: z.boolean(),
    hours: z.number().meta({ description: 'The limit of the watch when it was raised' }),
    overSince: instant,
    raisedAt: instant,
    acknowledged: z
      .object({ at: instant, by: z.object({ id: z.number(), name: z.string() }) })
      .nullable(),
    cleared: z.object({ at: instant, because: z.enum(clearedBecause) }).nullable(),
    can: z.object({ acknowledge: z.boolean() }),
  })
  .meta({ id: 'Alert' });
export type AlertView = z.infer<typeof alertView>;

export const alertListAnswer = z.object({
  data: z.array(alertView),
  next: z.string().nullable(),
  count: z.number().meta({ description: 'All alerts in this state with these filters' }),
});
export type AlertListAnswer = z.infer<typeof alertListAnswer>;

export const alertAnswer = z.object({ data: alertView });
export type AlertAnswer = z.infer<typeof alertAnswer>;

/** Operations of /api/alerts, for the generated description. */
export const alertsOperations = [
  {
    method: 'get',
    path: '/api/alerts',
    summary: 'Alerts of watches that are mine or tell me, latest first',
    query: alertListQuery,
    response: alertListAnswer,
  },
  {
    method: 'post',
    path: '/api/alerts/:id/acknowledge',
    summary: 'Take an alert: it stays until it clears, and no mail about it goes out any more',
    params: alertParams,
    response: alertAnswer,
  },
] as const;

/** What became of one try to send a mail. `unclear`: the line dropped, it may have gone. */
export const attemptOutcomes = ['started', 'accepted', 'refused', 'unclear'] as const;
export type AttemptOutcome = (typeof attemptOutcomes)[number];

export const outboxStates = ['pending', 'sending', 'sent', 'declined', 'failed'] as const;
export type OutboxState = (typeof outboxStates)[number];

export const mailListQuery = z.strictObject({
  state: z.enum(outboxStates).optional(),
  limit: z.coerce.number().int().min(1).max(200).default(50),
  cursor: z.string().max(400).optional(),
});

export const mailView = z
  .object({
    id: z.number(),
    messageId: z.string(),
    to: z.string(),
    watch: z.object({ id: z.number(), name: z.string() }),
    state: z.enum(outboxStates),
    mayHaveGoneTwice: z.boolean(),
    reason: z.string().nullable(),
    createdAt: instant,
    nextTryAt: instant.nullable(),
    sentAt: instant.nullable(),
    attempts: z.array(
      z.object({
        number: z.number(),
        startedAt: instant,
        finishedAt: instant.nullable(),
        outcome: z.enum(attemptOutcomes),
        detail: z.string().nullable(),
      }),
    ),
  })
  .meta({ id: 'Mail' });
export type MailView = z.infer<typeof mailView>;

export const mailListAnswer = z.object({
  data: z.array(mailView),
  next: z.string().nullable(),
});
export type MailListAnswer = z.infer<typeof mailListAnswer>;

/** Operations of /api/mail, for the generated description. */
export const mailOperations = [
  {
    method: 'get',
    path: '/api/mail',
    summary: 'Mail that went out or waits, newest first, with every try (administrator)',
    query: mailListQuery,
    response: mailListAnswer,
  },
] as const;

export const demoMailListAnswer = z.object({
  data: z.array(
    z.object({ id: z.string(), subject: z.string(), to: z.string(), at: instant.nullable() }),
  ),
  next: z.null(),
});
export type DemoMailListAnswer = z.infer<typeof demoMailListAnswer>;

/** Operations of the demo mailbox; there only in the demo. */
export const demoMailboxOperations = [
  {
    method: 'get',
    path: '/api/demo/mailbox',
    summary: 'Mail that the demo caught (demo only)',
    response: demoMailListAnswer,
  },
] as const;
