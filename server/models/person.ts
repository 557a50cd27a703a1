import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type NonAttribute,
  type Sequelize,
} from 'sequelize';
import type { Organisation } from './organisation.js';
import type { Site } from './site.js';

/** A row of `people`. */
export class Person extends Model<InferAttributes<Person>, InferCreationAttributes<Person>> {
  declare id: CreationOptional<number>;
  declare email: string;
  declare name: string;
  declare passwordHash: string | null;
  declare organisationId: number | null;
  declare roles: string;
  declare timeZone: CreationOptional<string>;
  declare createdAt: CreationOptional<Date>;
  declare organisation?: NonAttribute<Organisation | null>;
  declare sites?: NonAttribute<Site[]>;
}

/** Binds Person to the given connection. */
export function initPerson(sequelize: Sequelize): typeof Person {
  class Bound extends Person {}
  return Bound.init(
    {
      id: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true, autoIncrement: true },
      email: { type: DataTypes.STRING(254), allowNull: false },
      name: { type: DataTypes.STRING(120), allowNull: false },
      passwordHash: DataTypes.STRING(72),
      organisationId: DataTypes.INTEGER.UNSIGNED,
      roles: { type: DataTypes.STRING(80), allowNull: false },
      timeZone: DataTypes.STRING(64),
      createdAt: DataTypes.DATE(3),
    },
    { sequelize, tableName: 'people', modelName: 'Person' },
  );
}
