import {
  DataTypes,
  Model,
  type InferAttributes,
  type InferCreationAttributes,
  type NonAttribute,
  type Sequelize,
} from 'sequelize';
import type { Person } from './person.js';

/** A row of `sessions`. */
export class Session extends Model<InferAttributes<Session>, InferCreationAttributes<Session>> {
  declare id: string;
  declare personId: number;
  declare createdAt: Date;
  declare expiresAt: Date;
  declare endedAt: Date | null;
  declare person?: NonAttribute<Person>;
}

/** Binds Session to the given connection. */
export function initSession(sequelize: Sequelize): typeof Session {
  class Bound extends Session {}
  return Bound.init(
    {
      id: { type: DataTypes.STRING(36), primaryKey: true },
      personId: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      createdAt: { type: DataTypes.DATE(3), allowNull: false },
      expiresAt: { type: DataTypes.DATE(3), allowNull: false },
      endedAt: DataTypes.DATE(3),
    },
    { sequelize, tableName: 'sessions', modelName: 'Session' },
  );
}
