import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { AttemptOutcome } from '../contract/alerts.js';

/** A row of `mail_attempts`, written before the mail is handed over. */
export class MailAttempt extends Model<
  InferAttributes<MailAttempt>,
  InferCreationAttributes<MailAttempt>
> {
  declare id: CreationOptional<number>;
  declare outboxId: number;
  declare number: number;
  declare epoch: number;
  declare outcome: AttemptOutcome;
  declare detail: CreationOptional<string | null>;
  declare startedAt: Date;
  declare finishedAt: CreationOptional<Date | null>;
}

/** Binds MailAttempt to the given connection. */
export function initMailAttempt(sequelize: Sequelize): typeof MailAttempt {
  class Bound extends MailAttempt {}
  return Bound.init(
    {
      id: { type: DataTypes.BIGINT.UNSIGNED, primaryKey: true, autoIncrement: true },
      outboxId: { type: DataTypes.BIGINT.UNSIGNED, allowNull: false },
      number: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      epoch: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      outcome: { type: DataTypes.STRING(8), allowNull: false },
      detail: DataTypes.STRING(400),
      startedAt: { type: DataTypes.DATE(3), allowNull: false },
      finishedAt: DataTypes.DATE(3),
    },
    { sequelize, tableName: 'mail_attempts', modelName: 'MailAttempt' },
  );
}
