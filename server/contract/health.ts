import { z } from 'zod';

export const healthSchema = z.object({
  status: z.literal('ok'),
  database: z.literal('ok'),
  projectorLagMs: z.number().meta({
    description: 'Age of the oldest read that has not become history yet; 0 when caught up.',
  }),
  outboxPending: z.number().int().meta({ description: 'Mails that still have to go out.' }),
});
