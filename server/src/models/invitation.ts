import type { Role } from '@tallystone/contracts/people/schema';
import {
  type CreationOptional,
  DataTypes,
  type InferAttributes,
  type InferCreationAttributes,
  Model,
  type Sequelize,
} from 'sequelize';

export class Invitation extends Model<InferAttributes<Invitation>, InferCreationAttributes<Invitation>> {
  declare id: CreationOptional<string>;
  declare name: string;
  declare email: string;
  declare roles: Role[];
  /** SHA-256 of the token: whoever reads the table cannot use it. */
  declare tokenHash: Buffer;
  declare invitedBy: string;
  declare mailId: string;
  declare createdAt: CreationOptional<Date>;
  declare expiresAt: Date;
  declare acceptedAt: CreationOptional<Date | null>;
  declare withdrawnAt: CreationOptional<Date | null>;
}

export function defineInvitation(sequelize: Sequelize): void {
  Invitation.init(
    {
      id: { type: DataTypes.UUID, primaryKey: true, defaultValue: DataTypes.UUIDV4 },
      name: DataTypes.TEXT,
      email: DataTypes.TEXT,
      roles: DataTypes.ARRAY(DataTypes.TEXT),
      tokenHash: DataTypes.BLOB,
      invitedBy: DataTypes.UUID,
      mailId: DataTypes.UUID,
      createdAt: DataTypes.DATE,
      expiresAt: DataTypes.DATE,
      acceptedAt: DataTypes.DATE,
      withdrawnAt: DataTypes.DATE,
    },
    { sequelize, tableName: 'invitations' },
  );
}
