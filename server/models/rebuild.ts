import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { RebuildCause, RebuildState } from '../contract/rebuilds.js';

/** A row of `rebuilds`: history that is made anew, span by span. */
export class Rebuild extends Model<InferAttributes<Rebuild>, InferCreationAttributes<Rebuild>> {
  declare id: CreationOptional<number>;
  declare cause: RebuildCause;
  declare label: string;
  declare requestedBy: number | null;
  declare state: RebuildState;
  declare requestedAt: Date;
  declare finishedAt: Date | null;
}

/** Binds Rebuild to the given connection. */
export function initRebuild(sequelize: Sequelize): typeof Rebuild {
  class Bound extends Rebuild {}
  return Bound.init(
    {
      id: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true, autoIncrement: true },
      cause: { type: DataTypes.STRING(16), allowNull: false },
      label: { type: DataTypes.STRING(200), allowNull: false },
      requestedBy: DataTypes.INTEGER.UNSIGNED,
      state: { type: DataTypes.STRING(8), allowNull: false },
      requestedAt: { type: DataTypes.DATE(3), allowNull: false },
      finishedAt: DataTypes.DATE(3),
    },
    { sequelize, tableName: 'rebuilds', modelName: 'Rebuild' },
  );
}
