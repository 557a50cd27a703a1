import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A row of `reader_tokens`. */
export class ReaderToken extends Model<
  InferAttributes<ReaderToken>,
  InferCreationAttributes<ReaderToken>
> {
  declare id: CreationOptional<number>;
  declare siteId: number;
  declare tokenHash: Buffer;
  declare createdAt: Date;
  declare revokedAt: Date | null;
}

/** Binds ReaderToken to the given connection. */
export function initReaderToken(sequelize: Sequelize): typeof ReaderToken {
  class Bound extends ReaderToken {}
  return Bound.init(
    {
      id: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true, autoIncrement: true },
      siteId: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      tokenHash: { type: DataTypes.STRING(32, true), allowNull: false },
      createdAt: { type: DataTypes.DATE(3), allowNull: false },
      revokedAt: DataTypes.DATE(3),
    },
    { sequelize, tableName: 'reader_tokens', modelName: 'ReaderToken' },
  );
}
