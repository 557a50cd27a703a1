import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A row of `identities`. */
export class Identity extends Model<InferAttributes<Identity>, InferCreationAttributes<Identity>> {
  declare id: CreationOptional<number>;
  declare unitId: number;
  declare compact: string;
  declare scheme: string;
  declare mark: string;
  declare number: string;
  declare display: string;
  declare validFrom: Date | null;
  declare validTo: Date | null;
}

/** Binds Identity to the given connection. */
export function initIdentity(sequelize: Sequelize): typeof Identity {
  class Bound extends Identity {}
  return Bound.init(
    {
      id: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true, autoIncrement: true },
      unitId: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      compact: { type: DataTypes.STRING(24), allowNull: false },
      scheme: { type: DataTypes.STRING(8), allowNull: false },
      mark: { type: DataTypes.STRING(8), allowNull: false },
      number: { type: DataTypes.STRING(12), allowNull: false },
      display: { type: DataTypes.STRING(24), allowNull: false },
      validFrom: DataTypes.DATE(3),
      validTo: DataTypes.DATE(3),
    },
    { sequelize, tableName: 'identities', modelName: 'Identity' },
  );
}
