import bcrypt from 'bcryptjs';
import type { Express } from 'express';
import request from 'supertest';
import type { Role } from '../../server/contract/common.js';
import { aarIdentity, type Identity } from '../../server/domain/identifiers/identity.js';
import type { Database } from '../../server/lib/database.js';
import type { Antenna } from '../../server/models/antenna.js';
import { modelsOf } from '../../server/models/index.js';
import type { Organisation } from '../../server/models/organisation.js';
import type { Person } from '../../server/models/person.js';
import type { ReadPoint } from '../../server/models/read-point.js';
import type { Site } from '../../server/models/site.js';
import type { Unit } from '../../server/models/unit.js';

/** The password of everybody built here, hashed as cheaply as bcrypt allows. */
export const PASSWORD = 'a password of tests';
const passwordHash = bcrypt.hashSync(PASSWORD, 4);

let count = 0;
const nextNumber = () => (count += 1);

/** A row of `organisations`; code and name are made up unless given. */
export function buildOrganisation(
  db: Database,
  values: Partial<{ code: string; name: string; kind: string }> = {},
): Promise<Organisation> {
  const number = nextNumber();
  return modelsOf(db.sequelize).Organisation.create({
    code: `ORG${number}`,
    name: `Organisation ${number}`,
    kind: 'owner',
    ...values,
  });
}

/** A person who can sign in with PASSWORD. An owner gets an organisation, unless null is given. */
export async function buildPerson(
  db: Database,
  values: Partial<{
    email: string;
    name: string;
    roles: Role[];
    organisation: Organisation | null;
    sites: Site[];
    timeZone: string;
    password: string | null;
  }> = {},
): Promise<Person> {
  const { Person, PersonSite } = modelsOf(db.sequelize);
  const number = nextNumber();
  const roles = values.roles ?? ['administrator'];
  const isOwner = roles.includes('owner');
  const organisation =
    values.organisation === undefined && isOwner
      ? await buildOrganisation(db)
      : values.organisation;
  const person = await Person.create({
    email: values.email ?? `person${number}@tests.example`,
    name: values.name ?? `Person ${number}`,
    roles: roles.join(','),
    organisationId: organisation?.id ?? null,
    timeZone: values.timeZone ?? 'UTC',
    passwordHash: await hashOf(values.password),
  });
  const siteIds = (values.sites ?? []).map((site) => ({ personId: person.id, siteId: site.id }));
  if (siteIds.length > 0) await PersonSite.bulkCreate(siteIds);
  return person;
}

async function hashOf(password: string | null | undefined): Promise<string | null> {
  if (password === undefined) return passwordHash;
  return password === null ? null : bcrypt.hash(password, 4);
}

/** A site, a yard unless told otherwise. It gets no route node of its own. */
export function buildSite(
  db: Database,
  values: Partial<{
    code: string;
    name: string;
    kind: string;
    latitude: number;
    longitude: number;
    timeZone: string;
    returnHours: number;
    dwellLimitHours: number;
  }> = {},
): Promise<Site> {
  const number = nextNumber();
  return modelsOf(db.sequelize).Site.create({
    code: `SITE${number}`,
    name: `Site ${number}`,
    kind: 'yard',
    latitude: 45,
    longitude: -93,
    timeZone: 'America/Chicago',
    ...values,
  });
}

/**
 * A read point between the open line (decreasing side) and its site (increasing side), unless
 * other sides are given; null is the open line.
 */
export async function buildReadPoint(
  db: Database,
  values: Partial<{
    site: Site;
    code: string;
    name: string;
    track: string | null;
    kind: 'line' | 'spot';
    decreasingSite: Site | null;
    increasingSite: Site | null;
    passGapSeconds: number;
    visitGapSeconds: number;
    drillMinutes: number;
    /** Codes of the route nodes next on the open line, on either side. */
    toward: Partial<Record<'decreasing' | 'increasing', string[]>>;
  }> = {},
): Promise<ReadPoint> {
  const { site = await buildSite(db), decreasingSite, increasingSite, toward, ...columns } = values;
  const number = nextNumber();
  return modelsOf(db.sequelize).ReadPoint.create({
    siteId: site.id,
    code: `RP${number}`,
    name: `Read point ${number}`,
    track: null,
    kind: 'line',
    decreasingSiteId: decreasingSite?.id ?? null,
    decreasingTrack: null,
    increasingSiteId: increasingSite === undefined ? site.id : (increasingSite?.id ?? null),
    increasingTrack: null,
    ...(toward && { toward: JSON.stringify(toward) }),
    ...columns,
  });
}

/** An antenna; its number is the next free one of the read point's site unless given. */
export async function buildAntenna(
  db: Database,
  values: Partial<{
    readPoint: ReadPoint;
    number: number;
    offsetM: number;
    side: 'left' | 'right';
  }> = {},
): Promise<Antenna> {
  const { Antenna } = modelsOf(db.sequelize);
  const { readPoint = await buildReadPoint(db), ...columns } = values;
  const highest: number | null = await Antenna.max('number', {
    where: { siteId: readPoint.siteId },
  });
  return Antenna.create({
    siteId: readPoint.siteId,
    readPointId: readPoint.id,
    number: (highest ?? 0) + 1,
    offsetM: 0,
    side: 'left',
    ...columns,
  });
}

/** A registered car with its identity and the given tags; its owner is made up unless given. */
export async function buildUnit(
  db: Database,
  values: Partial<{
    identity: Identity;
    owner: Organisation | null;
    kind: string;
    carType: string | null;
    registered: boolean;
    lengthDm: number | null;
    axles: number | null;
    tags: { value: string; side?: 'left' | 'right' | null; validFrom?: Date; validTo?: Date }[];
  }> = {},
): Promise<Unit> {
  const { Identity, Tag, Unit } = modelsOf(db.sequelize);
  const { identity = aarIdentity('QTSX', nextNumber()), owner, tags = [], ...columns } = values;
  const registered = columns.registered ?? true;
  const ownerId = owner === undefined && registered ? (await buildOrganisation(db)).id : owner?.id;
  const unit = await Unit.create({
    unitKey: identity.compact,
    kind: 'car',
    groupCode: null,
    carType: null,
    lengthDm: null,
    axles: null,
    ...columns,
    registered,
    ownerId: ownerId ?? null,
  });
  await Identity.create({ ...identity, unitId: unit.id, validFrom: null, validTo: null });
  await Tag.bulkCreate(
    tags.map((tag) => ({ side: null, validFrom: null, validTo: null, ...tag, unitId: unit.id })),
  );
  return unit;
}

/** Signs a person in over HTTP; the agent that comes back carries their cookie. */
export async function signIn(
  app: Express,
  person: { email: string },
  password = PASSWORD,
): Promise<ReturnType<typeof request.agent>> {
  const agent = request.agent(app);
  await agent.post('/api/session').send({ email: person.email, password }).expect(200);
  return agent;
}
