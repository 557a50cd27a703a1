import request from 'supertest';
import { describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildOrganisation, buildPerson, PASSWORD, signIn } from '../support/factories.js';

const db = useTestDatabase();

describe('signing in', () => {
  test('answers who it is and opens the portal', async () => {
    const organisation = await buildOrganisation(db, { code: 'QTK', name: 'Quarry Tank' });
    const person = await buildPerson(db, { name: 'Ada Quill', roles: ['owner'], organisation });
    const agent = await signIn(createApp(buildContext(db)), person);
    const { body } = await agent.get('/api/session').expect(200);
    expect(body).toEqual({
      data: {
        user: {
          id: person.id,
          name: 'Ada Quill',
          email: person.email,
          roles: ['owner'],
          organisation: { code: 'QTK', name: 'Quarry Tank' },
          timeZone: 'UTC',
        },
        sections: ['fleet', 'alerts'],
        demoMailbox: false,
      },
    });
  });
});
