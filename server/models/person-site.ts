import {
  DataTypes,
  Model,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A row of `person_sites`. */
export class PersonSite extends Model<
  InferAttributes<PersonSite>,
  InferCreationAttributes<PersonSite>
> {
  declare personId: number;
  declare siteId: number;
}

/** Binds PersonSite to the given connection. */
export function initPersonSite(sequelize: Sequelize): typeof PersonSite {
  class Bound extends PersonSite {}
  return Bound.init(
    {
      personId: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true },
      siteId: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true },
    },
    { sequelize, tableName: 'person_sites', modelName: 'PersonSite' },
  );
}
