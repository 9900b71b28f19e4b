import type { PersonState, Role } from '@tallystone/contracts/people/schema';
import {
  type CreationOptional,
  DataTypes,
  type InferAttributes,
  type InferCreationAttributes,
  Model,
  type Sequelize,
} from 'sequelize';

/** Who acts: what policies decide by and what the record copies in. */
export interface Actor {
  readonly id: string;
  readonly name: string;
  readonly email: string;
  readonly roles: readonly Role[];
}

export class Person extends Model<InferAttributes<Person>, InferCreationAttributes<Person>> {
  declare id: CreationOptional<string>;
  declare name: string;
  declare email: string;
  declare passwordHash: string;
  declare state: CreationOptional<PersonState>;
  declare revision: CreationOptional<number>;
  declare createdAt: CreationOptional<Date>;
  declare lastSignInAt: CreationOptional<Date | null>;
}

export class PersonRole extends Model<InferAttributes<PersonRole>, InferCreationAttributes<PersonRole>> {
  declare personId: string;
  declare role: Role;
  declare givenAt: CreationOptional<Date>;
}

export function definePerson(sequelize: Sequelize): void {
  Person.init(
    {
      id: { type: DataTypes.UUID, primaryKey: true, defaultValue: DataTypes.UUIDV4 },
      name: DataTypes.TEXT,
      email: DataTypes.TEXT,
      passwordHash: DataTypes.TEXT,
      state: DataTypes.TEXT,
      revision: DataTypes.INTEGER,
      createdAt: DataTypes.DATE,
      lastSignInAt: DataTypes.DATE,
    },
    { sequelize, tableName: 'people' },
  );
  PersonRole.init(
    {
      personId: { type: DataTypes.UUID, primaryKey: true },
      role: { type: DataTypes.TEXT, primaryKey: true },
      givenAt: DataTypes.DATE,
    },
    { sequelize, tableName: 'person_roles' },
  );
}
