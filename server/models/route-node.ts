import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A row of `route_nodes`. */
export class RouteNode extends Model<
  InferAttributes<RouteNode>,
  InferCreationAttributes<RouteNode>
> {
  declare id: CreationOptional<number>;
  declare code: string;
  declare name: string;
  declare siteId: number | null;
  declare latitude: number;
  declare longitude: number;
}

/** Binds RouteNode to the given connection. */
export function initRouteNode(sequelize: Sequelize): typeof RouteNode {
  class Bound extends RouteNode {}
  return Bound.init(
    {
      id: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true, autoIncrement: true },
      code: { type: DataTypes.STRING(16), allowNull: false },
      name: { type: DataTypes.STRING(120), allowNull: false },
      siteId: DataTypes.INTEGER.UNSIGNED,
      latitude: { type: DataTypes.DOUBLE, allowNull: false },
      longitude: { type: DataTypes.DOUBLE, allowNull: false },
    },
    { sequelize, tableName: 'route_nodes', modelName: 'RouteNode' },
  );
}
