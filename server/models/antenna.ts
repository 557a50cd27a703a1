import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A row of `antennas`. */
export class Antenna extends Model<InferAttributes<Antenna>, InferCreationAttributes<Antenna>> {
  declare id: CreationOptional<number>;
  declare siteId: number;
  declare readPointId: number;
  declare number: number;
  declare offsetM: number;
  declare side: string;
}

/** Binds Antenna to the given connection. */
export function initAntenna(sequelize: Sequelize): typeof Antenna {
  class Bound extends Antenna {}
  return Bound.init(
    {
      id: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true, autoIncrement: true },
      siteId: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      readPointId: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      number: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      offsetM: { type: DataTypes.DOUBLE, allowNull: false },
      side: { type: DataTypes.STRING(5), allowNull: false },
    },
    { sequelize, tableName: 'antennas', modelName: 'Antenna' },
  );
}
