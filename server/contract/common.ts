import { z } from 'zod';
import { parseInstant } from './parse-instant.js';

/** What a person may be; one person may be several. */
export const roles = ['administrator', 'owner', 'clerk', 'dispatcher'] as const;
export type Role = (typeof roles)[number];

export const siteKinds = [
  'yard',
  'line',
  'interchange',
  'terminal',
  'port',
  'industry',
  'shop',
] as const;
export type SiteKind = (typeof siteKinds)[number];

export const equipmentKinds = [
  'car',
  'locomotive',
  'container',
  'trailer',
  'chassis',
  'generatorSet',
  'endOfTrain',
  'other',
] as const;

/** Rows a list answers: at most, and when the caller does not say. */
export const MOST_ROWS = 200;
export const USUAL_ROWS = 50;

/** The short name of a site, read point, organisation or junction. */
export const codeSchema = z
  .string()
  .regex(/^[A-Z0-9]{1,16}$/, 'must be 1 to 16 capital letters or digits');

/** Text for people: trimmed, never empty, no control characters, no halves of characters. */
export const textSchema = (most: number) =>
  z
    .string()
    .trim()
    .min(1, 'must not be empty')
    .max(most, `must have at most ${most} characters`)
    .regex(/^[^\p{Cc}\p{Cs}]*$/u, 'must not contain control characters');

/** An instant as RFC 3339 text, as every answer carries it. */
export const instantSchema = z.iso.datetime({ offset: true });

const noInstant = 'must be an RFC 3339 time with its offset, 1990 to 2100';

/** An instant that comes in: RFC 3339 with an offset; a Date after the door. */
export const instantInput = z
  .string(noInstant)
  .meta({ format: 'date-time' })
  .transform((text, context) => {
    const ms = parseInstant(text);
    if (ms !== null) return new Date(ms);
    context.addIssue({ code: 'custom', message: noInstant });
    return z.NEVER;
  });

/** An IANA time zone that this runtime knows. */
export const timeZoneSchema = z
  .string()
  .max(64, 'must be the name of an IANA time zone')
  .refine(isTimeZone, 'must be the name of an IANA time zone');

function isTimeZone(name: string): boolean {
  if (!/^[A-Za-z]/.test(name)) return false;
  try {
    return Boolean(new Intl.DateTimeFormat('en', { timeZone: name }));
  } catch {
    return false;
  }
}

/** `limit` and `cursor` of every list; spread them into the list's own query schema. */
export const pageShape = {
  limit: z
    .string()
    .regex(/^[0-9]{1,9}$/, `must be a whole number from 1 to ${MOST_ROWS}`)
    .transform(Number)
    .refine((n) => n >= 1 && n <= MOST_ROWS, `must be a whole number from 1 to ${MOST_ROWS}`)
    .default(USUAL_ROWS)
    .meta({ override: { type: 'integer', minimum: 1, maximum: MOST_ROWS, default: USUAL_ROWS } }),
  cursor: z
    .string()
    .max(1_000, 'is not one that a list gave')
    .optional()
    .meta({ description: 'The `next` of the page before.' }),
};

/** The query of a list that takes nothing but its page. */
export const pageQuery = z.object(pageShape);

/** A page of a list; `next` is the cursor of the page after it, null on the last. */
export const pageOf = <T extends z.ZodType>(row: T) =>
  z.object({ data: z.array(row), next: z.string().nullable() });

/** A single answer. */
export const dataOf = <T extends z.ZodType>(data: T) => z.object({ data });

/** A place's or reader's name beside its code, in answers about movements. */
export const namedSchema = z.object({ code: z.string(), name: z.string() });

/** RFC 9457. `errors` names every fault of the input at once. */
export const problemSchema = z
  .object({
    type: z.string(),
    title: z.string(),
    status: z.number().int(),
    detail: z.string(),
    instance: z.string(),
    requestId: z.string(),
    errors: z
      .array(
        z.object({
          pointer: z.string().meta({
            description: 'JSON pointer into the body, or `?name` for a query parameter.',
          }),
          detail: z.string(),
        }),
      )
      .optional(),
  })
  .meta({ id: 'Problem' });
