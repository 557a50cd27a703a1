import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { OutboxState } from '../contract/alerts.js';

/** A row of `outbox`: one mail to one recipient about the alerts of one notice. */
export class OutboxMail extends Model<
  InferAttributes<OutboxMail>,
  InferCreationAttributes<OutboxMail>
> {
  declare id: CreationOptional<number>;
  declare messageId: string;
  declare noticeId: string;
  declare watchId: number;
  declare personId: number | null;
  declare address: string;
  declare state: OutboxState;
  declare epoch: CreationOptional<number>;
  declare claimExpiresAt: CreationOptional<Date | null>;
  declare tries: CreationOptional<number>;
  declare nextTryAt: Date;
  declare mayHaveGoneTwice: CreationOptional<boolean>;
  declare reason: CreationOptional<string | null>;
  declare createdAt: Date;
  declare sentAt: CreationOptional<Date | null>;
}

/** Binds OutboxMail to the given connection. */
export function initOutboxMail(sequelize: Sequelize): typeof OutboxMail {
  class Bound extends OutboxMail {}
  return Bound.init(
    {
      id: { type: DataTypes.BIGINT.UNSIGNED, primaryKey: true, autoIncrement: true },
      messageId: { type: DataTypes.STRING(255), allowNull: false },
      noticeId: { type: DataTypes.CHAR(36), allowNull: false },
      watchId: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      personId: DataTypes.INTEGER.UNSIGNED,
      address: { type: DataTypes.STRING(254), allowNull: false },
      state: { type: DataTypes.STRING(12), allowNull: false },
      epoch: DataTypes.INTEGER.UNSIGNED,
      claimExpiresAt: DataTypes.DATE(3),
      tries: DataTypes.INTEGER.UNSIGNED,
      nextTryAt: { type: DataTypes.DATE(3), allowNull: false },
      mayHaveGoneTwice: DataTypes.BOOLEAN,
      reason: DataTypes.STRING(400),
      createdAt: { type: DataTypes.DATE(3), allowNull: false },
      sentAt: DataTypes.DATE(3),
    },
    { sequelize, tableName: 'outbox', modelName: 'OutboxMail' },
  );
}
