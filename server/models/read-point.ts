import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A row of `read_points`. */
export class ReadPoint extends Model<
  InferAttributes<ReadPoint>,
  InferCreationAttributes<ReadPoint>
> {
  declare id: CreationOptional<number>;
  declare siteId: number;
  declare code: string;
  declare name: string;
  declare track: string | null;
  declare kind: string;
  declare decreasingSiteId: number | null;
  declare decreasingTrack: string | null;
  declare increasingSiteId: number | null;
  declare increasingTrack: string | null;
  declare passGapSeconds: CreationOptional<number>;
  declare visitGapSeconds: CreationOptional<number>;
  declare drillMinutes: CreationOptional<number>;
  /** JSON: `{ "decreasing": ["LARCHJ"], "increasing": [] }`, codes of route nodes. */
  declare toward: CreationOptional<string>;
}

/** Binds ReadPoint to the given connection. */
export function initReadPoint(sequelize: Sequelize): typeof ReadPoint {
  class Bound extends ReadPoint {}
  return Bound.init(
    {
      id: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true, autoIncrement: true },
      siteId: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      code: { type: DataTypes.STRING(16), allowNull: false },
      name: { type: DataTypes.STRING(120), allowNull: false },
      track: DataTypes.STRING(40),
      kind: { type: DataTypes.STRING(8), allowNull: false },
      decreasingSiteId: DataTypes.INTEGER.UNSIGNED,
      decreasingTrack: DataTypes.STRING(40),
      increasingSiteId: DataTypes.INTEGER.UNSIGNED,
      increasingTrack: DataTypes.STRING(40),
      passGapSeconds: DataTypes.INTEGER.UNSIGNED,
      visitGapSeconds: DataTypes.INTEGER.UNSIGNED,
      drillMinutes: DataTypes.INTEGER.UNSIGNED,
      toward: DataTypes.TEXT,
    },
    { sequelize, tableName: 'read_points', modelName: 'ReadPoint' },
  );
}
