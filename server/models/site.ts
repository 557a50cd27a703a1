import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A row of `sites`. */
export class Site extends Model<InferAttributes<Site>, InferCreationAttributes<Site>> {
  declare id: CreationOptional<number>;
  declare code: string;
  declare name: string;
  declare kind: string;
  declare latitude: number;
  declare longitude: number;
  declare timeZone: string;
  declare returnHours: CreationOptional<number>;
  declare dwellLimitHours: CreationOptional<number>;
  /** JSON: `[{ "name": "South lead", "equipped": false }]`. */
  declare leads: CreationOptional<string>;
  declare createdAt: CreationOptional<Date>;
}

/** Binds Site to the given connection. */
export function initSite(sequelize: Sequelize): typeof Site {
  class Bound extends Site {}
  return Bound.init(
    {
      id: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true, autoIncrement: true },
      code: { type: DataTypes.STRING(16), allowNull: false },
      name: { type: DataTypes.STRING(120), allowNull: false },
      kind: { type: DataTypes.STRING(16), allowNull: false },
      latitude: { type: DataTypes.DOUBLE, allowNull: false },
      longitude: { type: DataTypes.DOUBLE, allowNull: false },
      timeZone: { type: DataTypes.STRING(64), allowNull: false },
      returnHours: DataTypes.DOUBLE,
      dwellLimitHours: DataTypes.DOUBLE,
      leads: DataTypes.TEXT,
      createdAt: DataTypes.DATE(3),
    },
    { sequelize, tableName: 'sites', modelName: 'Site' },
  );
}
