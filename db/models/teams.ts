/** Rows of project codes and of the mail outbox. */
import {
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import { column } from './columns.ts';

export class ProjectCode extends Model<InferAttributes<ProjectCode>, InferCreationAttributes<ProjectCode>> {
  declare id: string;
  declare teamId: string;
  /** Unique in its team, letter case aside. */
  declare code: string;
  declare client: CreationOptional<string | null>;
  declare poNumber: CreationOptional<string | null>;
  declare createdAt: string;
  declare closedAt: CreationOptional<string | null>;
}

export interface StoredAttachment {
  filename: string;
  contentType: string;
  base64: string;
}

export class Mail extends Model<InferAttributes<Mail>, InferCreationAttributes<Mail>> {
  declare id: string;
  /** Names the occasion (`receipt:invoice_…`), so that one occasion queues one mail. */
  declare messageKey: string;
  declare recipient: string;
  declare subject: string;
  /** Null once sent. */
  declare text: CreationOptional<string | null>;
  declare html: CreationOptional<string | null>;
  declare attachments: CreationOptional<StoredAttachment[] | null>;
  declare state: 'queued' | 'sent' | 'failed';
  declare attempts: CreationOptional<number>;
  declare lastError: CreationOptional<string | null>;
  declare createdAt: string;
  declare nextAttemptAt: CreationOptional<string | null>;
  declare sentAt: CreationOptional<string | null>;
}

export function defineTeams(sequelize: Sequelize): void {
  ProjectCode.init(
    {
      id: column.id(),
      teamId: column.text(),
      code: column.text(),
      client: column.optionalText(),
      poNumber: column.optionalText(),
      createdAt: column.text(),
      closedAt: column.optionalText(),
    },
    { sequelize, tableName: 'projectCodes', timestamps: false },
  );
  Mail.init(
    {
      id: column.id(),
      messageKey: column.text(),
      recipient: column.text(),
      subject: column.text(),
      text: column.optionalText(),
      html: column.optionalText(),
      attachments: column.optionalJson('attachments'),
      state: column.text(),
      attempts: { ...column.integer(), defaultValue: 0 },
      lastError: column.optionalText(),
      createdAt: column.text(),
      nextAttemptAt: column.optionalText(),
      sentAt: column.optionalText(),
    },
    { sequelize, tableName: 'mails', timestamps: false },
  );
}
