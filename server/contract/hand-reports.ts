import { z } from 'zod';
import { parseUnit } from '../domain/identifiers/parse-unit.js';
import { instantInput, instantSchema, pageOf, pageShape, textSchema } from './common.js';

/** Reports, or retractions, of one request. */
export const MOST_HAND_REPORTS = 500;

/** A UUID that the client makes, in either case. */
const reportId = z.uuid('must be a UUID').transform((id) => id.toLowerCase());

/** A car or box in any form that people write; its compact identity after the door. */
const unitInput = z
  .string()
  .max(60, 'is too long for a mark and number')
  .transform((text, context) => {
    const parsed = parseUnit(text);
    if (parsed.kind === 'unit') return parsed.identity.compact;
    const message =
      parsed.kind === 'wrong' ? parsed.detail : 'A number alone names nothing: write the mark too.';
    context.addIssue({ code: 'custom', message });
    return z.NEVER;
  });

/** One car seen, or looked for and not there; `position` counts along the track from 1. */
const handReportInput = z.object({
  id: reportId,
  unit: unitInput,
  at: instantInput,
  position: z.int().min(1).max(10_000).nullish(),
  seen: z.boolean(),
});
export type HandReportInput = z.output<typeof handReportInput>;

export const handReportsBody = z
  .object({
    track: textSchema(40).nullish(),
    reports: z.array(handReportInput).min(1).max(MOST_HAND_REPORTS),
  })
  .meta({ id: 'HandReportsBody' });
export type HandReportsBody = z.output<typeof handReportsBody>;
/** What a client sends: every instant still text. */
export type HandReportsSent = z.input<typeof handReportsBody>;

export const retractionsBody = z
  .object({ ids: z.array(reportId).min(1).max(MOST_HAND_REPORTS) })
  .meta({ id: 'RetractionsBody' });

export const handReportProblemCodes = ['conflict', 'clock-ahead', 'too-old', 'unknown'] as const;
export type HandReportProblemCode = (typeof handReportProblemCodes)[number];

/** What became of each report or retraction: the three numbers add up. */
export const handReportsAnswer = z
  .object({
    accepted: z.int(),
    duplicates: z.int(),
    rejected: z.int(),
    problems: z.array(
      z.object({
        index: z.int().meta({ description: 'Place in the request, from 0' }),
        code: z.enum(handReportProblemCodes),
        detail: z.string(),
      }),
    ),
  })
  .meta({ id: 'HandReportsAnswer' });
export type HandReportsAnswer = z.infer<typeof handReportsAnswer>;

/** What a car was written as in a request becomes its compact identity, as the ledger has it. */
export const handReportsQuery = z.object({ unit: unitInput.optional(), ...pageShape });
export type HandReportsQuery = z.output<typeof handReportsQuery>;

export const handReportView = z
  .object({
    id: z.string(),
    unitId: z.string().meta({ description: 'As it was reported; a former identity redirects.' }),
    display: z.string(),
    at: instantSchema,
    track: z.string().nullable(),
    position: z.number().int().nullable(),
    seen: z.boolean(),
    by: z.string().nullable().meta({ description: 'Null: not for you, or gone.' }),
    receivedAt: instantSchema,
    retracted: z
      .object({ at: instantSchema, by: z.string().nullable() })
      .nullable()
      .meta({ description: 'Taken back: it counts for nothing.' }),
  })
  .meta({ id: 'HandReport' });
export type HandReportView = z.infer<typeof handReportView>;

export const handReportListAnswer = pageOf(handReportView);
