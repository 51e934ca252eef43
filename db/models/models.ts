/** Rows of models and model versions. */
import {
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { column } from './columns.ts';

/** A reaction network under a name; its content is in its versions. */
export class NetworkModel extends Model<InferAttributes<NetworkModel>, InferCreationAttributes<NetworkModel>> {
  declare id: string;
  declare teamId: string;
  declare name: string;
  declare createdBy: string | null;
  declare createdAt: string;
  declare archivedAt: CreationOptional<string | null>;
}

/** Immutable, numbered, content-hashed; a trigger refuses UPDATE and DELETE. */
export class ModelVersion extends Model<InferAttributes<ModelVersion>, InferCreationAttributes<ModelVersion>> {
  declare id: string;
  declare modelId: string;
  declare teamId: string;
  declare number: number;
  /** SHA-256 of the normalised document's JSON. */
  declare contentHash: string;
  declare document: NetworkDocument;
  declare note: string;
  declare createdBy: string | null;
  declare createdAt: string;
}

export function defineNetworkModels(sequelize: Sequelize): void {
  NetworkModel.init(
    {
      id: column.id(),
      teamId: column.text(),
      name: column.text(),
      createdBy: column.optionalText(),
      createdAt: column.text(),
      archivedAt: column.optionalText(),
    },
    { sequelize, tableName: 'models', timestamps: false },
  );
  ModelVersion.init(
    {
      id: column.id(),
      modelId: column.text(),
      teamId: column.text(),
      number: column.integer(),
      contentHash: column.text(),
      document: column.json('document'),
      note: column.text(),
      createdBy: column.optionalText(),
      createdAt: column.text(),
    },
    { sequelize, tableName: 'modelVersions', timestamps: false },
  );
}
