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

/** A row of `units`. */
export class Unit extends Model<InferAttributes<Unit>, InferCreationAttributes<Unit>> {
  declare id: CreationOptional<number>;
  declare unitKey: string;
  declare kind: string;
  declare groupCode: number | null;
  declare carType: string | null;
  declare registered: CreationOptional<boolean>;
  declare ownerId: number | null;
  declare lengthDm: number | null;
  declare axles: number | null;
  declare createdAt: CreationOptional<Date>;
  declare owner?: NonAttribute<Organisation | null>;
}

/** Binds Unit to the given connection. */
export function initUnit(sequelize: Sequelize): typeof Unit {
  class Bound extends Unit {}
  return Bound.init(
    {
      id: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true, autoIncrement: true },
      unitKey: { type: DataTypes.STRING(24), allowNull: false },
      kind: { type: DataTypes.STRING(16), allowNull: false },
      groupCode: DataTypes.INTEGER.UNSIGNED,
      carType: DataTypes.STRING(60),
      registered: DataTypes.BOOLEAN,
      ownerId: DataTypes.INTEGER.UNSIGNED,
      lengthDm: DataTypes.INTEGER.UNSIGNED,
      axles: DataTypes.INTEGER.UNSIGNED,
      createdAt: DataTypes.DATE(3),
    },
    { sequelize, tableName: 'units', modelName: 'Unit' },
  );
}
