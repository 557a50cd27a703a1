import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { AlertState, ClearedBecause } from '../contract/alerts.js';

/** A row of `alerts`. The column `lasting` is worked out by the database and guards the key. */
export class Alert extends Model<InferAttributes<Alert>, InferCreationAttributes<Alert>> {
  declare id: CreationOptional<number>;
  declare watchId: number;
  declare unitId: number;
  declare state: AlertState;
  declare siteId: number | null;
  declare sinceAt: Date;
  declare atLeast: boolean;
  declare hours: number;
  declare noticeId: string;
  declare raisedAt: Date;
  declare acknowledgedAt: CreationOptional<Date | null>;
  declare acknowledgedBy: CreationOptional<number | null>;
  declare clearedAt: CreationOptional<Date | null>;
  declare clearedBecause: CreationOptional<ClearedBecause | null>;
}

/** Binds Alert to the given connection. */
export function initAlert(sequelize: Sequelize): typeof Alert {
  class Bound extends Alert {}
  return Bound.init(
    {
      id: { type: DataTypes.BIGINT.UNSIGNED, primaryKey: true, autoIncrement: true },
      watchId: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      unitId: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      state: { type: DataTypes.STRING(12), allowNull: false },
      siteId: DataTypes.INTEGER.UNSIGNED,
      sinceAt: { type: DataTypes.DATE(3), allowNull: false },
      atLeast: { type: DataTypes.BOOLEAN, allowNull: false },
      hours: { type: DataTypes.DOUBLE, allowNull: false },
      noticeId: { type: DataTypes.CHAR(36), allowNull: false },
      raisedAt: { type: DataTypes.DATE(3), allowNull: false },
      acknowledgedAt: DataTypes.DATE(3),
      acknowledgedBy: DataTypes.INTEGER.UNSIGNED,
      clearedAt: DataTypes.DATE(3),
      clearedBecause: DataTypes.STRING(8),
    },
    { sequelize, tableName: 'alerts', modelName: 'Alert' },
  );
}
