import {
  DataTypes,
  Model,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A row of `last_seen`. */
export class LastSeen extends Model<InferAttributes<LastSeen>, InferCreationAttributes<LastSeen>> {
  declare unitId: number;
  declare at: Date;
  declare state: string;
  declare siteId: number | null;
  declare track: string | null;
  declare readPointId: number | null;
  declare direction: string | null;
  declare basis: string | null;
  declare passStartedAt: Date | null;
  declare passOrdinal: number | null;
  declare staySiteId: number | null;
  declare stayFirstSeenAt: Date | null;
  declare arrivedAt: Date | null;
  declare quietAt: Date;
  declare limitAt: Date;
}

/** Binds LastSeen to the given connection. */
export function initLastSeen(sequelize: Sequelize): typeof LastSeen {
  class Bound extends LastSeen {}
  return Bound.init(
    {
      unitId: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true },
      at: { type: DataTypes.DATE(3), allowNull: false },
      state: { type: DataTypes.STRING(8), allowNull: false },
      siteId: DataTypes.INTEGER.UNSIGNED,
      track: DataTypes.STRING(40),
      readPointId: DataTypes.INTEGER.UNSIGNED,
      direction: DataTypes.STRING(10),
      basis: DataTypes.STRING(8),
      passStartedAt: DataTypes.DATE(3),
      passOrdinal: DataTypes.INTEGER.UNSIGNED,
      staySiteId: DataTypes.INTEGER.UNSIGNED,
      stayFirstSeenAt: DataTypes.DATE(3),
      arrivedAt: DataTypes.DATE(3),
      quietAt: { type: DataTypes.DATE(3), allowNull: false },
      limitAt: { type: DataTypes.DATE(3), allowNull: false },
    },
    { sequelize, tableName: 'last_seen', modelName: 'LastSeen' },
  );
}
