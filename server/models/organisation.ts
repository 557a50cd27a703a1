import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A row of `organisations`. */
export class Organisation extends Model<
  InferAttributes<Organisation>,
  InferCreationAttributes<Organisation>
> {
  declare id: CreationOptional<number>;
  declare code: string;
  declare name: string;
  declare kind: string;
  declare createdAt: CreationOptional<Date>;
}

/** Binds Organisation to the given connection. */
export function initOrganisation(sequelize: Sequelize): typeof Organisation {
  class Bound extends Organisation {}
  return Bound.init(
    {
      id: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true, autoIncrement: true },
      code: { type: DataTypes.STRING(16), allowNull: false },
      name: { type: DataTypes.STRING(120), allowNull: false },
      kind: { type: DataTypes.STRING(16), allowNull: false },
      createdAt: DataTypes.DATE(3),
    },
    { sequelize, tableName: 'organisations', modelName: 'Organisation' },
  );
}
