import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { WatchKind } from '../contract/watches.js';

/** What a watch covers, by our own ids; a part that is absent narrows nothing. */
export interface StoredScope {
  unitIds?: number[];
  marks?: string[];
  kinds?: string[];
  ownerIds?: number[];
  siteIds?: number[];
}

/** A row of `watches`; `endedAt` set: ended, kept for its alerts. */
export class Watch extends Model<InferAttributes<Watch>, InferCreationAttributes<Watch>> {
  declare id: CreationOptional<number>;
  declare personId: number;
  declare name: string;
  declare kind: WatchKind;
  declare scope: StoredScope;
  declare addresses: string[];
  declare schedule: { at: 'once' };
  declare includeOnHand: boolean;
  declare hours: number;
  declare createdAt: Date;
  declare evaluatedAt: CreationOptional<Date | null>;
  declare endedAt: CreationOptional<Date | null>;
}

/** Binds Watch to the given connection. */
export function initWatch(sequelize: Sequelize): typeof Watch {
  class Bound extends Watch {}
  return Bound.init(
    {
      id: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true, autoIncrement: true },
      personId: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      name: { type: DataTypes.STRING(120), allowNull: false },
      kind: { type: DataTypes.STRING(12), allowNull: false },
      scope: { type: DataTypes.JSON, allowNull: false },
      addresses: { type: DataTypes.JSON, allowNull: false },
      schedule: { type: DataTypes.JSON, allowNull: false },
      includeOnHand: { type: DataTypes.BOOLEAN, allowNull: false },
      hours: { type: DataTypes.DOUBLE, allowNull: false },
      createdAt: { type: DataTypes.DATE(3), allowNull: false },
      evaluatedAt: DataTypes.DATE(3),
      endedAt: DataTypes.DATE(3),
    },
    { sequelize, tableName: 'watches', modelName: 'Watch' },
  );
}
