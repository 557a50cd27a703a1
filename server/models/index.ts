import type { Model, ModelStatic, Sequelize } from 'sequelize';
import { initAlert } from './alert.js';
import { initAntenna } from './antenna.js';
import { initIdentity } from './identity.js';
import { initLastSeen } from './last-seen.js';
import { initLeg } from './leg.js';
import { initMailAttempt } from './mail-attempt.js';
import { initOrganisation } from './organisation.js';
import { initOutboxMail } from './outbox-mail.js';
import { initPerson } from './person.js';
import { initPersonSite } from './person-site.js';
import { initReadPoint } from './read-point.js';
import { initReaderToken } from './reader-token.js';
import { initRebuild } from './rebuild.js';
import { initReportToken } from './report-token.js';
import { initRouteEdge } from './route-edge.js';
import { initRouteNode } from './route-node.js';
import { initSession } from './session.js';
import { initSite } from './site.js';
import { initStay } from './stay.js';
import { initTag } from './tag.js';
import { initUnit } from './unit.js';
import { initWatch } from './watch.js';
import { initWatchPerson } from './watch-person.js';

/** All models bound to one connection. */
export type Models = ReturnType<typeof bindModels>;

const bound = new WeakMap<Sequelize, Models>();

/** The models of a connection; bound once, the same objects ever after. */
export function modelsOf(sequelize: Sequelize): Models {
  let models = bound.get(sequelize);
  if (!models) {
    models = bindModels(sequelize);
    bound.set(sequelize, models);
  }
  return models;
}

function bindModels(sequelize: Sequelize) {
  const models = {
    Alert: initAlert(sequelize),
    Antenna: initAntenna(sequelize),
    Identity: initIdentity(sequelize),
    LastSeen: initLastSeen(sequelize),
    Leg: initLeg(sequelize),
    MailAttempt: initMailAttempt(sequelize),
    Organisation: initOrganisation(sequelize),
    OutboxMail: initOutboxMail(sequelize),
    Person: initPerson(sequelize),
    PersonSite: initPersonSite(sequelize),
    ReadPoint: initReadPoint(sequelize),
    ReaderToken: initReaderToken(sequelize),
    Rebuild: initRebuild(sequelize),
    ReportToken: initReportToken(sequelize),
    RouteEdge: initRouteEdge(sequelize),
    RouteNode: initRouteNode(sequelize),
    Session: initSession(sequelize),
    Site: initSite(sequelize),
    Stay: initStay(sequelize),
    Tag: initTag(sequelize),
    Unit: initUnit(sequelize),
    Watch: initWatch(sequelize),
    WatchPerson: initWatchPerson(sequelize),
  };
  models.Person.belongsTo(models.Organisation, {
    as: 'organisation',
    foreignKey: 'organisationId',
  });
  models.Person.belongsToMany(models.Site, {
    as: 'sites',
    through: models.PersonSite,
    foreignKey: 'personId',
    otherKey: 'siteId',
    timestamps: false,
  });
  models.Session.belongsTo(models.Person, { as: 'person', foreignKey: 'personId' });
  models.ReadPoint.belongsTo(models.Site, { as: 'site', foreignKey: 'siteId' });
  models.Antenna.belongsTo(models.ReadPoint, { as: 'readPoint', foreignKey: 'readPointId' });
  models.Unit.belongsTo(models.Organisation, { as: 'owner', foreignKey: 'ownerId' });
  models.Unit.hasMany(models.Identity, { as: 'identities', foreignKey: 'unitId' });
  models.Unit.hasMany(models.Tag, { as: 'tags', foreignKey: 'unitId' });
  models.Unit.hasOne(models.LastSeen, { as: 'lastSeen', foreignKey: 'unitId' });
  models.Watch.belongsTo(models.Person, { as: 'person', foreignKey: 'personId' });
  models.Watch.belongsToMany(models.Person, {
    as: 'people',
    through: models.WatchPerson,
    foreignKey: 'watchId',
    otherKey: 'personId',
    timestamps: false,
  });
  models.Alert.belongsTo(models.Watch, { as: 'watch', foreignKey: 'watchId' });
  models.OutboxMail.belongsTo(models.Watch, { as: 'watch', foreignKey: 'watchId' });
  models.OutboxMail.hasMany(models.MailAttempt, { as: 'attempts', foreignKey: 'outboxId' });
  // Sequelize looks at the first instance of a model for class fields that hide its attributes. On
  // one that a query loaded in part it would take the guards of the omitted ones for such fields.
  for (const model of Object.values<ModelStatic<Model>>(models)) model.build();
  return models;
}
