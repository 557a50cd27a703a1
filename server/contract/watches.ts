import { z } from 'zod';
import {
  codeSchema,
  dataOf,
  equipmentKinds,
  instantSchema,
  namedSchema,
  pageOf,
  pageQuery,
  textSchema,
} from './common.js';

/** What a watch can look for so far; the other kinds of the interface come with their figures. */
export const watchKinds = ['quiet', 'dwell'] as const;
export type WatchKind = (typeof watchKinds)[number];

/** Hours without a read before a car counts as quiet, and of standing before it is past a limit. */
export const DEFAULT_WATCH_HOURS: Record<WatchKind, number> = { quiet: 72, dwell: 96 };

/** Upper bounds of one watch, so that evaluating it stays cheap. */
export const WATCH_LIMITS = {
  units: 500,
  marks: 50,
  owners: 50,
  sites: 200,
  people: 20,
  addresses: 10,
  hours: 8760,
  perPerson: 100,
} as const;

const listOf = <T extends z.ZodType>(item: T, most: number) => z.array(item).min(1).max(most);

/** Which equipment a watch covers; a part that is absent narrows nothing. */
export const watchScope = z.object({
  units: listOf(z.string().trim().min(1).max(24), WATCH_LIMITS.units)
    .optional()
    .meta({ description: 'Compact identities, as in the address of the unit page' }),
  marks: listOf(
    z
      .string()
      .trim()
      .toUpperCase()
      .regex(/^[A-Z]{1,4}$/, 'must be one to four letters'),
    WATCH_LIMITS.marks,
  )
    .optional()
    .meta({ description: 'Reporting marks or owner codes' }),
  kinds: listOf(z.enum(equipmentKinds), equipmentKinds.length)
    .optional()
    .meta({ description: 'Absent: all but locomotives and end-of-train devices' }),
  owners: listOf(z.int().positive(), WATCH_LIMITS.owners)
    .optional()
    .meta({ description: 'Ids of organisations' }),
  sites: listOf(codeSchema, WATCH_LIMITS.sites)
    .optional()
    .meta({ description: 'Site codes: where it stands (dwell) or was last read (quiet)' }),
});
export type WatchScope = z.infer<typeof watchScope>;

const mailAddress = z.email('must be a mail address').max(254);

const recipients = z.object({
  people: z
    .array(z.int().positive())
    .max(WATCH_LIMITS.people)
    .default([])
    .meta({ description: 'Ids of people; oneself, or people of the same organisation' }),
  addresses: z.array(mailAddress).max(WATCH_LIMITS.addresses).default([]),
});

const schedule = z.object({ at: z.literal('once') });

const name = textSchema(120);

const hours = z.number().min(1).max(WATCH_LIMITS.hours);

/** What a watch is made of; recipients absent means the person who sets it. */
export const watchInput = z.object({
  name,
  kind: z.enum(watchKinds),
  scope: watchScope.default({}),
  includeOnHand: z
    .boolean()
    .default(false)
    .meta({ description: 'Quiet only: also cars that stand in a yard or other site' }),
  hours: hours.optional().meta({ description: 'Default 72 for quiet, 96 for dwell' }),
  recipients: recipients.optional(),
  schedule: schedule.default({ at: 'once' }),
});
export type WatchInput = z.infer<typeof watchInput>;

/** What may be changed later; the kind stays. Absent keys keep their value. */
export const watchChange = z.object({
  name: name.optional(),
  scope: watchScope.optional(),
  includeOnHand: z.boolean().optional(),
  hours: hours.optional(),
  recipients: recipients.optional(),
  schedule: schedule.optional(),
});
export type WatchChange = z.infer<typeof watchChange>;

/** What a preview needs: a watch without name, recipients and schedule. */
export const watchPreviewInput = watchInput.pick({
  kind: true,
  scope: true,
  includeOnHand: true,
  hours: true,
});
export type WatchPreviewInput = z.infer<typeof watchPreviewInput>;

/** The number of a record in an address. */
export const idInput = z
  .string()
  .regex(/^[1-9][0-9]{0,14}$/, 'must be the number of a record')
  .transform(Number)
  .meta({ override: { type: 'integer', minimum: 1 } });

export const watchParams = z.object({ id: idInput });

export const watchListQuery = pageQuery;

const idAndName = z.object({ id: z.number(), name: z.string() });

/** A watch as answered; `scope` and `recipients` can be sent back as they are. */
export const watchView = z
  .object({
    id: z.number(),
    name: z.string(),
    kind: z.enum(watchKinds),
    scope: watchScope,
    includeOnHand: z.boolean(),
    hours: z.number(),
    recipients: z.object({ people: z.array(z.number()), addresses: z.array(z.string()) }),
    schedule,
    owner: idAndName,
    named: z.object({
      units: z.array(z.object({ unitId: z.string(), display: z.string() })),
      owners: z.array(idAndName),
      sites: z.array(namedSchema),
      people: z.array(idAndName),
    }),
    openAlerts: z.number(),
    createdAt: instantSchema,
    evaluatedAt: instantSchema.nullable(),
  })
  .meta({ id: 'Watch' });
export type WatchView = z.infer<typeof watchView>;

const can = z.object({ update: z.boolean(), delete: z.boolean() });
export const watchAnswer = z.object({ data: watchView, can });
export type WatchAnswer = z.infer<typeof watchAnswer>;

export const watchListAnswer = pageOf(watchView.extend({ can }).meta({ id: 'ListedWatch' }));
export type WatchListAnswer = z.infer<typeof watchListAnswer>;

/** A car that a watch would raise an alert for; `atLeast`: it was there before `since`. */
export const watchedUnit = z.object({
  unitId: z.string(),
  display: z.string(),
  kind: z.string(),
  site: namedSchema.nullable(),
  since: instantSchema,
  atLeast: z.boolean(),
  hours: z.number(),
});
export type WatchedUnit = z.infer<typeof watchedUnit>;

export const watchPreviewAnswer = dataOf(
  z.object({
    covers: z
      .number()
      .meta({ description: 'In scope and in sight; of a dwell watch: standing there now' }),
    wouldRaise: z.number(),
    first: z.array(watchedUnit).meta({ description: 'The longest first, at most ten' }),
  }),
);
export type WatchPreviewAnswer = z.infer<typeof watchPreviewAnswer>;
