/** Rows of second factors and their recovery codes. */
import {
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import { column } from './columns.ts';

export class SecondFactor extends Model<InferAttributes<SecondFactor>, InferCreationAttributes<SecondFactor>> {
  declare userId: string;
  /** Base32; readable with the key of the data folder only: server/auth/sealed-secret.ts. */
  declare sealedSecret: string;
  declare createdAt: string;
  /** Null until a first code has shown that the person's device has the secret. */
  declare confirmedAt: CreationOptional<string | null>;
  /** Time step of the last code accepted. */
  declare lastStep: CreationOptional<number>;
}

export class RecoveryCode extends Model<InferAttributes<RecoveryCode>, InferCreationAttributes<RecoveryCode>> {
  declare codeHash: string;
  declare userId: string;
  declare usedAt: CreationOptional<string | null>;
}

export function defineSecondFactor(sequelize: Sequelize): void {
  SecondFactor.init(
    {
      userId: column.id(),
      sealedSecret: column.text(),
      createdAt: column.text(),
      confirmedAt: column.optionalText(),
      lastStep: { ...column.integer(), defaultValue: 0 },
    },
    { sequelize, tableName: 'secondFactors', timestamps: false },
  );
  RecoveryCode.init(
    { codeHash: column.id(), userId: column.text(), usedAt: column.optionalText() },
    { sequelize, tableName: 'recoveryCodes', timestamps: false },
  );
}
