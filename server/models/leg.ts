import {
  DataTypes,
  Model,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A row of `legs`. */
export class Leg extends Model<InferAttributes<Leg>, InferCreationAttributes<Leg>> {
  declare unitId: number;
  declare toFirstSeenAt: Date;
  declare toSiteId: number;
  declare fromFirstSeenAt: Date;
  declare fromSiteId: number;
  declare departedAt: Date;
  declare arrivedAt: Date | null;
  declare railMetres: number;
  declare estimated: boolean;
}

/** Binds Leg to the given connection. */
export function initLeg(sequelize: Sequelize): typeof Leg {
  class Bound extends Leg {}
  return Bound.init(
    {
      unitId: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true },
      toFirstSeenAt: { type: DataTypes.DATE(3), primaryKey: true },
      toSiteId: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true },
      fromFirstSeenAt: { type: DataTypes.DATE(3), allowNull: false },
      fromSiteId: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      departedAt: { type: DataTypes.DATE(3), allowNull: false },
      arrivedAt: DataTypes.DATE(3),
      railMetres: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      estimated: { type: DataTypes.BOOLEAN, allowNull: false },
    },
    { sequelize, tableName: 'legs', modelName: 'Leg' },
  );
}
