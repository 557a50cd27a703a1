import { z } from 'zod';
import { dataOf, instantSchema, namedSchema, pageOf, pageShape } from './common.js';
import { idInput, watchKinds } from './watches.js';

/** States an alert can be in so far; put off and done come later. */
export const alertStates = ['open', 'acknowledged', 'cleared'] as const;
export type AlertState = (typeof alertStates)[number];

/**
 * Why an alert cleared: read again; left the site; what the watch asks for changed (also: the
 * person may no longer see it); the watch ended.
 */
export const clearedBecause = ['read', 'left', 'changed', 'ended'] as const;
export type ClearedBecause = (typeof clearedBecause)[number];

export const alertListQuery = z.object({
  state: z.enum(alertStates).default('open'),
  watch: idInput.optional().meta({ description: 'Id of one watch' }),
  unit: z.string().trim().min(1).max(24).optional().meta({ description: 'One compact identity' }),
  ...pageShape,
});
export type AlertListQuery = z.infer<typeof alertListQuery>;

export const alertParams = z.object({ id: idInput });

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
    site: namedSchema.nullable(),
    since: instantSchema,
    atLeast: z.boolean(),
    hours: z.number().meta({ description: 'The limit of the watch when it was raised' }),
    overSince: instantSchema,
    raisedAt: instantSchema,
    acknowledged: z
      .object({ at: instantSchema, by: z.object({ id: z.number(), name: z.string() }) })
      .nullable(),
    cleared: z.object({ at: instantSchema, because: z.enum(clearedBecause) }).nullable(),
    can: z.object({ acknowledge: z.boolean() }),
  })
  .meta({ id: 'Alert' });
export type AlertView = z.infer<typeof alertView>;

export const alertListAnswer = pageOf(alertView).extend({
  count: z.number().meta({ description: 'All alerts in this state with these filters' }),
});
export type AlertListAnswer = z.infer<typeof alertListAnswer>;

export const alertAnswer = dataOf(alertView);
export type AlertAnswer = z.infer<typeof alertAnswer>;

/** What became of one try to send a mail. `unclear`: the line dropped, it may have gone. */
export const attemptOutcomes = ['started', 'accepted', 'refused', 'unclear'] as const;
export type AttemptOutcome = (typeof attemptOutcomes)[number];

export const outboxStates = ['pending', 'sending', 'sent', 'declined', 'failed'] as const;
export type OutboxState = (typeof outboxStates)[number];

export const mailListQuery = z.object({
  state: z.enum(outboxStates).optional(),
  ...pageShape,
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
    createdAt: instantSchema,
    nextTryAt: instantSchema.nullable(),
    sentAt: instantSchema.nullable(),
    attempts: z.array(
      z.object({
        number: z.number(),
        startedAt: instantSchema,
        finishedAt: instantSchema.nullable(),
        outcome: z.enum(attemptOutcomes),
        detail: z.string().nullable(),
      }),
    ),
  })
  .meta({ id: 'Mail' });
export type MailView = z.infer<typeof mailView>;

export const mailListAnswer = pageOf(mailView);
export type MailListAnswer = z.infer<typeof mailListAnswer>;

export const demoMailListAnswer = z.object({
  data: z.array(
    z.object({ id: z.string(), subject: z.string(), to: z.string(), at: instantSchema.nullable() }),
  ),
  next: z.null(),
});
export type DemoMailListAnswer = z.infer<typeof demoMailListAnswer>;
