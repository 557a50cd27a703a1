import { z } from 'zod';
import { codeSchema, instantInput, instantSchema } from './common.js';

/** Bounds of one request to the ingest door; a body beyond them is refused whole. */
export const INGEST_BOUNDS = {
  reads: 5_000,
  bytes: 2 * 1024 * 1024,
  depth: 32,
  tagBytes: 64,
} as const;

/** Why one read of a request was not taken. */
export const rejectCodes = [
  'not-an-object',
  'missing-antenna',
  'missing-tag',
  'tag-too-long',
  'missing-time',
  'invalid-time',
  'bad-value',
  'not-json',
] as const;
export type RejectCode = (typeof rejectCodes)[number];

/** Why a read is stored but set aside. */
export const holdCodes = [
  'unknown-antenna',
  'undecodable-tag',
  'check-failed',
  'unmapped-epc',
  'not-equipment',
  'clock-ahead',
  'too-old',
] as const;
export type HoldCode = (typeof holdCodes)[number];

const siteCode = z.string('must be the code of a site').meta({
  description: "Code of the reader's site; the site of the token when absent",
  example: 'ALDER',
});

/** One read as a reader sends it: described here, judged read by read in `ingest/`. */
export const readInput = z
  .object({
    antenna: z.int().min(1).max(255),
    tag: z.string().min(1).meta({ description: 'As the reader gave it, 64 bytes at most' }),
    readAt: instantSchema.meta({ example: '2026-03-04T05:06:07.890Z' }),
    rssi: z.number().nullish(),
    count: z.int().min(0).nullish(),
  })
  .meta({ id: 'ReadInput' });

export const readsBody = z
  .object({ site: siteCode.optional(), reads: z.array(readInput).max(INGEST_BOUNDS.reads) })
  .meta({ id: 'ReadsBody' });

/** The part of the body that refuses it whole; the reads are judged one by one. */
export const readsEnvelope = z.object({
  site: siteCode.optional(),
  reads: z.array(z.unknown(), 'must be a list of reads'),
});

export const ndjsonQuery = z.object({ site: siteCode.optional() });
/** One train counted by wheel sensors. */
export const wheelsBody = z
  .object({
    site: siteCode.optional(),
    readPoint: codeSchema,
    startedAt: instantInput,
    endedAt: instantInput,
    axles: z.int().min(1).max(10_000),
    direction: z.enum(['increasing', 'decreasing', 'unknown']).nullish(),
    speedKmh: z.number().min(0).max(600).nullish(),
  })
  .refine(({ startedAt, endedAt }) => startedAt <= endedAt, {
    path: ['endedAt'],
    error: 'must not be before startedAt',
  })
  .meta({ id: 'WheelsBody' });
export type WheelsBody = z.output<typeof wheelsBody>;

/** What became of each read: the four numbers add up to the reads of the request. */
export const ingestAnswer = z
  .object({
    accepted: z.int(),
    duplicates: z.int(),
    held: z.int().meta({ description: 'Stored, but set aside' }),
    rejected: z.int(),
    problems: z.array(
      z.object({
        index: z.int().meta({ description: 'Place of the read in the request, from 0' }),
        code: z.enum([...rejectCodes, ...holdCodes]),
        detail: z.string(),
      }),
    ),
  })
  .meta({ id: 'IngestAnswer' });
export type IngestAnswer = z.infer<typeof ingestAnswer>;
