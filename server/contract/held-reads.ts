import { z } from 'zod';
import {
  codeSchema,
  dataOf,
  instantInput,
  instantSchema,
  namedSchema,
  pageOf,
  pageShape,
} from './common.js';
import { holdCodes, type HoldCode } from './ingest.js';

/** What an administrator can do about reads that are set aside; `none`: they stay where they are. */
export const heldActs = ['release', 'addAntenna', 'registerTag', 'none'] as const;
export type HeldAct = (typeof heldActs)[number];

/** The one act that each reason has. */
export const actOfHold: Record<HoldCode, HeldAct> = {
  'unknown-antenna': 'addAntenna',
  'undecodable-tag': 'none',
  'check-failed': 'none',
  'unmapped-epc': 'registerTag',
  'not-equipment': 'none',
  'clock-ahead': 'release',
  'too-old': 'none',
};

/** A read that is set aside, as the ledger keeps it; site, antenna, time and tag name it. */
export const heldReadView = z
  .object({
    site: namedSchema,
    antenna: z.int(),
    tag: z.string(),
    readAt: instantSchema,
    receivedAt: instantSchema,
  })
  .meta({ id: 'HeldRead' });
export type HeldReadView = z.infer<typeof heldReadView>;

/** The reads of one site that are set aside for one reason. */
export const heldGroupView = z
  .object({
    code: z.enum(holdCodes),
    act: z.enum(heldActs),
    site: namedSchema,
    count: z.int(),
    stillAhead: z.int().nullable().meta({
      description: 'clock-ahead: how many have a time that has not come yet; else null',
    }),
    oldestAt: instantSchema,
    newestAt: instantSchema,
    antennas: z.array(z.int()).meta({
      description: 'unknown-antenna: numbers that the site has read by and no antenna has; else []',
    }),
    sample: z.array(heldReadView).meta({ description: 'The latest of them, five at most' }),
  })
  .meta({ id: 'HeldGroup' });
export type HeldGroupView = z.infer<typeof heldGroupView>;

export const heldListAnswer = pageOf(heldGroupView).extend({
  counts: z.array(z.object({ code: z.enum(holdCodes), count: z.int() })).meta({
    description: 'Of all sites, by reason; reasons without a read are left out',
  }),
});
export type HeldListAnswer = z.infer<typeof heldListAnswer>;

export const heldReadsQuery = z.object({
  code: z.enum(holdCodes),
  site: codeSchema.optional(),
  ...pageShape,
});
export type HeldReadsQuery = z.output<typeof heldReadsQuery>;

export const heldReadsAnswer = pageOf(heldReadView);
export type HeldReadsAnswer = z.infer<typeof heldReadsAnswer>;

export const heldTagsQuery = z.object({ code: z.enum(holdCodes), ...pageShape });
export type HeldTagsQuery = z.output<typeof heldTagsQuery>;

/** The reads of one tag that are set aside for one reason, at whatever site. */
export const heldTagView = z
  .object({ tag: z.string(), count: z.int(), oldestAt: instantSchema, newestAt: instantSchema })
  .meta({ id: 'HeldTag' });
export type HeldTagView = z.infer<typeof heldTagView>;

export const heldTagsAnswer = pageOf(heldTagView);
export type HeldTagsAnswer = z.infer<typeof heldTagsAnswer>;

export const releaseInput = z
  .object({
    code: z.literal('clock-ahead', 'must be clock-ahead: no other reads can be released'),
    site: codeSchema.optional(),
    until: instantInput
      .optional()
      .meta({ description: 'Only reads with this time or an earlier one; all when absent' }),
  })
  .meta({ id: 'ReleaseInput' });
export type ReleaseInput = z.output<typeof releaseInput>;

export const releaseAnswer = dataOf(z.object({ released: z.int() }));
export type ReleaseAnswer = z.infer<typeof releaseAnswer>;
