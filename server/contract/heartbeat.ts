import { z } from 'zod';
import { antennaNumber } from './administration.js';
import { codeSchema, instantSchema } from './common.js';

const READER_TIME = 'must be an RFC 3339 time with its offset, 1970 to 2100';

/** A reader whose clock was lost begins at 1970: that too is worth being told. */
const readerTime = z.iso
  .datetime({ offset: true, error: READER_TIME })
  .transform((text) => new Date(text))
  .refine((at) => at.getUTCFullYear() >= 1970 && at.getUTCFullYear() <= 2100, READER_TIME);

/** What a reader says of itself. `noise` in dBm. */
export const heartbeatBody = z
  .object({
    site: codeSchema.optional(),
    readerTime,
    antennas: z
      .array(
        z.object({
          number: antennaNumber,
          powered: z.boolean(),
          noise: z.number().min(-9_999).max(9_999).nullish(),
        }),
      )
      .max(255)
      .superRefine(refuseRepeats),
  })
  .meta({ id: 'HeartbeatBody' });
export type HeartbeatBody = z.output<typeof heartbeatBody>;

function refuseRepeats(antennas: { number: number }[], context: z.RefinementCtx): void {
  const seen = new Set<number>();
  antennas.forEach(({ number }, index) => {
    if (seen.has(number)) {
      context.addIssue({ code: 'custom', path: [index, 'number'], message: 'stands here twice' });
    }
    seen.add(number);
  });
}

/** The last word of a site's reader; an antenna that it left out keeps its own older one. */
export const heartbeatView = z
  .object({
    at: instantSchema.meta({ description: 'When it came.' }),
    clockOffsetMs: z
      .number()
      .int()
      .meta({ description: "The reader's clock less ours; the way here counts as slow." }),
    antennas: z.array(
      z.object({
        number: z.number().int(),
        powered: z.boolean(),
        noise: z.number().nullable(),
        at: instantSchema,
      }),
    ),
  })
  .meta({ id: 'Heartbeat' });
export type HeartbeatView = z.infer<typeof heartbeatView>;
