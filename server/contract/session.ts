import { z } from 'zod';
import { dataOf, namedSchema, roles } from './common.js';

/** The sections of the header, in the order in which they stand for this person. */
export const sections = ['fleet', 'alerts', 'setAside', 'rework', 'doubts'] as const;
export type Section = (typeof sections)[number];

/** What `POST /api/session` takes. Nothing here says which passwords are in use. */
export const signInSchema = z.object({
  email: z.string().trim().min(1, 'must not be empty').max(254, 'must have at most 254 characters'),
  password: z.string().min(1, 'must not be empty').max(200, 'must have at most 200 characters'),
});
export type SignIn = z.infer<typeof signInSchema>;

export const userSchema = z
  .object({
    id: z.number().int(),
    name: z.string(),
    email: z.string(),
    roles: z.array(z.enum(roles)),
    organisation: namedSchema.nullable(),
    timeZone: z.string(),
  })
  .meta({ id: 'User' });
export type User = z.infer<typeof userSchema>;

export const sessionSchema = dataOf(
  z.object({
    user: userSchema,
    sections: z.array(z.enum(sections)),
    demoMailbox: z.boolean().meta({ description: 'The demo mailbox can be opened.' }),
  }),
);
export type SessionAnswer = z.infer<typeof sessionSchema>;
