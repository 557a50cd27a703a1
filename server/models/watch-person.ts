import {
  DataTypes,
  Model,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A row of `watch_people`: a person whom a watch tells. */
export class WatchPerson extends Model<
  InferAttributes<WatchPerson>,
  InferCreationAttributes<WatchPerson>
> {
  declare watchId: number;
  declare personId: number;
}

/** Binds WatchPerson to the given connection. */
export function initWatchPerson(sequelize: Sequelize): typeof WatchPerson {
  class Bound extends WatchPerson {}
  return Bound.init(
    {
      watchId: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true },
      personId: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true },
    },
    { sequelize, tableName: 'watch_people', modelName: 'WatchPerson' },
  );
}
