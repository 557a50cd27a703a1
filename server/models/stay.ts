import {
  DataTypes,
  Model,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A row of `stays`. */
export class Stay extends Model<InferAttributes<Stay>, InferCreationAttributes<Stay>> {
  declare unitId: number;
  declare firstSeenAt: Date;
  declare siteId: number;
  declare lastSeenAt: Date;
  declare track: string | null;
  declare arrivedAt: Date | null;
  declare arrivalBasis: string;
  declare arrivalEarliest: Date | null;
  declare arrivalLatest: Date | null;
  declare arrivalFinalAt: Date | null;
  declare departedAt: Date | null;
  declare departureBasis: string | null;
  declare departureEarliest: Date | null;
  declare departureLatest: Date | null;
  declare departureFinalAt: Date | null;
  declare excursions: number;
  declare outOfDwell: boolean;
}

/** Binds Stay to the given connection. */
export function initStay(sequelize: Sequelize): typeof Stay {
  class Bound extends Stay {}
  return Bound.init(
    {
      unitId: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true },
      firstSeenAt: { type: DataTypes.DATE(3), primaryKey: true },
      siteId: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true },
      lastSeenAt: { type: DataTypes.DATE(3), allowNull: false },
      track: DataTypes.STRING(40),
      arrivedAt: DataTypes.DATE(3),
      arrivalBasis: { type: DataTypes.STRING(8), allowNull: false },
      arrivalEarliest: DataTypes.DATE(3),
      arrivalLatest: DataTypes.DATE(3),
      arrivalFinalAt: DataTypes.DATE(3),
      departedAt: DataTypes.DATE(3),
      departureBasis: DataTypes.STRING(8),
      departureEarliest: DataTypes.DATE(3),
      departureLatest: DataTypes.DATE(3),
      departureFinalAt: DataTypes.DATE(3),
      excursions: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      outOfDwell: { type: DataTypes.BOOLEAN, allowNull: false },
    },
    { sequelize, tableName: 'stays', modelName: 'Stay' },
  );
}
