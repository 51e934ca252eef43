/** Rows of outgoing webhooks and their deliveries. */
import {
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { WebhookKind } from '@/domain/webhooks/webhook-kinds.ts';
import { column } from './columns.ts';

export class Webhook extends Model<InferAttributes<Webhook>, InferCreationAttributes<Webhook>> {
  declare id: string;
  declare teamId: string;
  declare createdBy: string;
  declare url: string;
  declare kinds: WebhookKind[];
  /** Readable with the key of the data folder only: server/auth/sealed-secret.ts. */
  declare sealedSecret: string;
  declare createdAt: string;
  declare pausedAt: CreationOptional<string | null>;
  declare removedAt: CreationOptional<string | null>;
}

export class WebhookDelivery extends Model<InferAttributes<WebhookDelivery>, InferCreationAttributes<WebhookDelivery>> {
  /** Also the `webhook-id` header: the same in every attempt. */
  declare id: string;
  declare webhookId: string;
  /** Names what happened (`job:job_…:…`), so that it is told once. */
  declare occasion: string;
  declare kind: WebhookKind;
  /** The exact text that is signed and sent. */
  declare body: string;
  declare state: 'queued' | 'delivered' | 'failed';
  declare attempts: CreationOptional<number>;
  declare createdAt: string;
  declare nextAttemptAt: CreationOptional<string | null>;
  declare lastAttemptAt: CreationOptional<string | null>;
  /** HTTP status of the last answer; null when there was none. */
  declare lastStatus: CreationOptional<number | null>;
  declare lastFault: CreationOptional<string | null>;
}

export function defineWebhooks(sequelize: Sequelize): void {
  Webhook.init(
    {
      id: column.id(),
      teamId: column.text(),
      createdBy: column.text(),
      url: column.text(),
      kinds: column.json('kinds'),
      sealedSecret: column.text(),
      createdAt: column.text(),
      pausedAt: column.optionalText(),
      removedAt: column.optionalText(),
    },
    { sequelize, tableName: 'webhooks', timestamps: false },
  );
  WebhookDelivery.init(
    {
      id: column.id(),
      webhookId: column.text(),
      occasion: column.text(),
      kind: column.text(),
      body: column.text(),
      state: column.text(),
      attempts: { ...column.integer(), defaultValue: 0 },
      createdAt: column.text(),
      nextAttemptAt: column.optionalText(),
      lastAttemptAt: column.optionalText(),
      lastStatus: column.optionalInteger(),
      lastFault: column.optionalText(),
    },
    { sequelize, tableName: 'webhookDeliveries', timestamps: false },
  );
}
