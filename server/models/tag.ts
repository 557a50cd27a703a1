import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A row of `tags`. */
export class Tag extends Model<InferAttributes<Tag>, InferCreationAttributes<Tag>> {
  declare id: CreationOptional<number>;
  declare unitId: number;
  declare value: string;
  declare side: string | null;
  declare validFrom: Date | null;
  declare validTo: Date | null;
}

/** Binds Tag to the given connection. */
export function initTag(sequelize: Sequelize): typeof Tag {
  class Bound extends Tag {}
  return Bound.init(
    {
      id: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true, autoIncrement: true },
      unitId: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      value: { type: DataTypes.STRING(64), allowNull: false },
      side: DataTypes.STRING(5),
      validFrom: DataTypes.DATE(3),
      validTo: DataTypes.DATE(3),
    },
    { sequelize, tableName: 'tags', modelName: 'Tag' },
  );
}
