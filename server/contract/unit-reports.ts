import { z } from 'zod';
import { instantSchema, namedSchema, pageQuery } from './common.js';
import { handReportView } from './hand-reports.js';
import { reportEvents } from './movement-reports.js';

export const unitReportsQuery = pageQuery;
export type UnitReportsQuery = z.output<typeof unitReportsQuery>;

/** A movement report about the unit. Source and reference are for who sent it and administrators. */
const movementReportView = z.object({
  kind: z.literal('movement'),
  id: z.string(),
  at: instantSchema,
  site: namedSchema,
  event: z.enum(reportEvents),
  organisation: namedSchema,
  source: z.string().nullable(),
  reference: z.string().nullable(),
  receivedAt: instantSchema,
});

const unitHandReportView = handReportView.extend({
  kind: z.literal('hand'),
  site: namedSchema,
  can: z.object({ retract: z.boolean() }),
});

/** A movement report or a report by eye. */
export const unitReportView = z
  .discriminatedUnion('kind', [movementReportView, unitHandReportView])
  .meta({ id: 'UnitReport' });
export type UnitReportView = z.infer<typeof unitReportView>;

export const unitReportsAnswer = z.object({
  data: z.array(unitReportView),
  next: z.string().nullable(),
  can: z.object({
    reportAt: z.array(namedSchema).meta({
      description: 'Sites that I may report from by eye, the first 200 by name.',
    }),
  }),
});
export type UnitReportsAnswer = z.infer<typeof unitReportsAnswer>;
