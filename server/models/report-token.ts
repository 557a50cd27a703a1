import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A row of `report_tokens`. */
export class ReportToken extends Model<
  InferAttributes<ReportToken>,
  InferCreationAttributes<ReportToken>
> {
  declare id: CreationOptional<number>;
  declare organisationId: number;
  declare tokenHash: Buffer;
  declare createdAt: Date;
  declare revokedAt: Date | null;
}

/** Binds ReportToken to the given connection. */
export function initReportToken(sequelize: Sequelize): typeof ReportToken {
  class Bound extends ReportToken {}
  return Bound.init(
    {
      id: { type: DataTypes.INTEGER.UNSIGNED, primaryKey: true, autoIncrement: true },
      organisationId: { type: DataTypes.INTEGER.UNSIGNED, allowNull: false },
      tokenHash: { type: DataTypes.STRING(32, true), allowNull: false },
      createdAt: { type: DataTypes.DATE(3), allowNull: false },
      revokedAt: DataTypes.DATE(3),
    },
    { sequelize, tableName: 'report_tokens', modelName: 'ReportToken' },
  );
}
