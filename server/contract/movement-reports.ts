import { z } from 'zod';
import { codeSchema, instantSchema, textSchema } from './common.js';
import { INGEST_BOUNDS } from './ingest.js';

/** What a movement report can say of a car or box. */
export const reportEvents = [
  'arrived',
  'departed',
  'placed',
  'released',
  'pulled',
  'interchanged',
  'badOrdered',
  'repaired',
  'loaded',
  'emptied',
  'lifted',
  'grounded',
] as const;
export type ReportEvent = (typeof reportEvents)[number];

/** Longest source and reference, in characters. */
export const MOST_REFERENCE = 64;

/** Why one report of a request was not taken; `duplicate`: its reference stands for another one. */
export const reportProblemCodes = [
  'not-an-object',
  'missing-reference',
  'missing-unit',
  'missing-event',
  'missing-time',
  'missing-site',
  'bad-value',
  'not-a-unit',
  'unknown-event',
  'invalid-time',
  'clock-ahead',
  'too-old',
  'unknown-site',
  'duplicate',
] as const;
export type ReportProblemCode = (typeof reportProblemCodes)[number];

const source = textSchema(MOST_REFERENCE).meta({
  description: 'The system that the references come from',
  example: 'car-desk',
});

/** One report as it comes: described here, judged report by report in `ingest/`. */
const reportInput = z
  .object({
    reference: textSchema(MOST_REFERENCE).meta({ description: 'Names the report in its source' }),
    unit: z.string().meta({ description: 'Mark and number in any form', example: 'QTKX 40127' }),
    event: z.enum(reportEvents),
    at: instantSchema,
    site: codeSchema,
  })
  .meta({ id: 'MovementReportInput' });

export const reportsBody = z
  .object({ source, reports: z.array(reportInput).max(INGEST_BOUNDS.reads) })
  .meta({ id: 'MovementReportsBody' });

/** The part of the body that refuses it whole; the reports are judged one by one. */
export const reportsEnvelope = z.object({ source, reports: z.array(z.unknown()) });

/** What became of each report: the three numbers add up to the reports of the request. */
export const reportsAnswer = z
  .object({
    accepted: z.int(),
    duplicates: z.int().meta({ description: 'Known by source and reference; the first stays' }),
    rejected: z.int(),
    problems: z.array(
      z.object({
        index: z.int().meta({ description: 'Place of the report in the request, from 0' }),
        code: z.enum(reportProblemCodes),
        detail: z.string(),
      }),
    ),
  })
  .meta({ id: 'MovementReportsAnswer' });
export type ReportsAnswer = z.infer<typeof reportsAnswer>;
