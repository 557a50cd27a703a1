import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A row of `route_edges`. */
export class RouteEdge extends Model<
  InferAttributes<RouteEdge>,
  InferCreationAttributes<RouteEdge>
> {
  declare id: CreationOptional<number>;
  declare fromNodeId: number;
  declare toNodeId: number;
  declare line: string;
  declare kind: string;
  declare railMetres: number;
}

/** Binds RouteEdge to the given connection. */
export function initRouteEdge(sequelize: Sequelize): typeof RouteEdge {
  class Bound extends RouteEdge {}
  return Bound.init(
    {
      id: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true, autoIncrement: true },
      fromNodeId: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      toNodeId: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      line: { type: DataTypes.STRING(60), allowNull: false },
      kind: { type: DataTypes.STRING(5), allowNull: false },
      railMetres: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
    },
    { sequelize, tableName: 'route_edges', modelName: 'RouteEdge' },
  );
}
