import { afterEach } from 'vitest';
import { mkdtemp, rm } from 'node:fs/promises';
import os from 'node:os';
import path from 'node:path';
import type { WatchKind } from '../../server/contract/watches.js';
import type { Database } from '../../server/lib/database.js';
import { modelsOf } from '../../server/models/index.js';
import type { Person } from '../../server/models/person.js';
import type { StoredScope, Watch } from '../../server/models/watch.js';
import { startSmtpFake, type SmtpFake } from '../../server/smtp-fake/start-smtp-fake.js';

/** A watch that tells the person who set it, unless others are named. */
export async function buildWatch(
  db: Database,
  person: Person,
  values: Partial<{
    name: string;
    kind: WatchKind;
    scope: StoredScope;
    hours: number;
    includeOnHand: boolean;
    people: Person[];
    addresses: string[];
    createdAt: Date;
  }> = {},
): Promise<Watch> {
  const { Watch, WatchPerson } = modelsOf(db.sequelize);
  const { people = [person], kind = 'quiet', ...columns } = values;
  const watch = await Watch.create({
    personId: person.id,
    name: 'A watch',
    kind,
    scope: {},
    addresses: [],
    schedule: { at: 'once' },
    includeOnHand: false,
    hours: kind === 'quiet' ? 72 : 96,
    createdAt: new Date('2026-03-01T00:00:00.000Z'),
    ...columns,
  });
  await WatchPerson.bulkCreate(people.map(({ id }) => ({ watchId: watch.id, personId: id })));
  return watch;
}

/** Starts a mail server that keeps what it gets; it and its directory end with the test. */
export function useSmtpFakes(): () => Promise<SmtpFake> {
  const running: SmtpFake[] = [];
  afterEach(async () => {
    for (const fake of running.splice(0)) {
      await fake.close();
      await rm(path.dirname(fake.directory), { recursive: true });
    }
  });
  return async () => {
    const parent = await mkdtemp(path.join(os.tmpdir(), 'fishplate-mail-'));
    const fake = await startSmtpFake({ port: 0, directory: path.join(parent, 'mailbox') });
    running.push(fake);
    return fake;
  };
}
