/** Rows of saved cards, automatic top-ups, disputes and receivables. */
import {
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import { column } from './columns.ts';

type Attributes<M extends Model> = InferAttributes<M>;
type Creation<M extends Model> = InferCreationAttributes<M>;

/** A visit to the payment service's page to save a card. */
export class CardSetup extends Model<Attributes<CardSetup>, Creation<CardSetup>> {
  declare id: string;
  declare teamId: string;
  declare userId: string | null;
  declare requestKey: string | null;
  declare state: 'pending' | 'saved' | 'expired';
  declare customerId: CreationOptional<string | null>;
  declare idempotencyKey: string;
  declare sessionId: CreationOptional<string | null>;
  declare pageUrl: CreationOptional<string | null>;
  declare createdAt: string;
  declare expiresAt: string;
  declare decidedAt: CreationOptional<string | null>;
  declare checks: CreationOptional<number>;
  declare nextCheckAt: string | null;
}

/** A team has one card that is not removed. */
export class SavedCard extends Model<Attributes<SavedCard>, Creation<SavedCard>> {
  declare paymentMethodId: string;
  declare teamId: string;
  declare setupId: string;
  declare brand: string;
  declare lastFour: string;
  declare expiryMonth: number;
  declare expiryYear: number;
  declare savedAt: string;
  declare savedBy: string | null;
  declare removedAt: CreationOptional<string | null>;
  declare forgetKey: CreationOptional<string | null>;
  declare forgottenAt: CreationOptional<string | null>;
}

/** What a team has set; the top-ups themselves are in `topUps`. */
export class AutomaticTopUp extends Model<Attributes<AutomaticTopUp>, Creation<AutomaticTopUp>> {
  declare teamId: string;
  declare state: 'on' | 'off' | 'stopped';
  declare thresholdMicrocredits: number;
  declare pack: string;
  declare currency: string;
  declare monthlyCeilingMinor: number;
  declare problem: string | null;
  declare ceilingToldMonth: CreationOptional<string | null>;
  declare updatedAt: string;
  declare updatedBy: string | null;
}

export class Dispute extends Model<Attributes<Dispute>, Creation<Dispute>> {
  declare id: string;
  declare teamId: string;
  declare topUpId: string;
  declare invoiceId: string;
  declare lotId: string;
  declare state: 'open' | 'won' | 'lost';
  declare reason: string;
  declare totalMinor: number;
  declare currency: string;
  declare coveredMicrocredits: number;
  declare frozenMicrocredits: number;
  declare takenMicrocredits: number;
  declare openedAt: string;
  declare decidedAt: CreationOptional<string | null>;
  declare problem: CreationOptional<string | null>;
  declare checks: CreationOptional<number>;
  declare nextCheckAt: string | null;
}

export class Receivable extends Model<Attributes<Receivable>, Creation<Receivable>> {
  declare id: string;
  declare teamId: string;
  declare disputeId: string;
  declare invoiceId: string;
  declare totalMinor: number;
  declare currency: string;
  declare state: 'open' | 'settled' | 'written_off';
  declare createdAt: string;
  declare decidedAt: CreationOptional<string | null>;
  declare decidedBy: CreationOptional<string | null>;
  declare reason: CreationOptional<string | null>;
}

export function defineCards(sequelize: Sequelize): void {
  const table = (tableName: string) => ({ sequelize, tableName, timestamps: false });
  const checks = () => ({ ...column.integer(), defaultValue: 0 });
  CardSetup.init(
    {
      id: column.id(),
      teamId: column.text(),
      userId: column.optionalText(),
      requestKey: column.optionalText(),
      state: column.text(),
      customerId: column.optionalText(),
      idempotencyKey: column.text(),
      sessionId: column.optionalText(),
      pageUrl: column.optionalText(),
      createdAt: column.text(),
      expiresAt: column.text(),
      decidedAt: column.optionalText(),
      checks: checks(),
      nextCheckAt: column.optionalText(),
    },
    table('cardSetups'),
  );
  SavedCard.init(
    {
      paymentMethodId: column.id(),
      teamId: column.text(),
      setupId: column.text(),
      brand: column.text(),
      lastFour: column.text(),
      expiryMonth: column.integer(),
      expiryYear: column.integer(),
      savedAt: column.text(),
      savedBy: column.optionalText(),
      removedAt: column.optionalText(),
      forgetKey: column.optionalText(),
      forgottenAt: column.optionalText(),
    },
    table('savedCards'),
  );
  AutomaticTopUp.init(
    {
      teamId: column.id(),
      state: column.text(),
      thresholdMicrocredits: column.integer(),
      pack: column.text(),
      currency: column.text(),
      monthlyCeilingMinor: column.integer(),
      problem: column.optionalText(),
      ceilingToldMonth: column.optionalText(),
      updatedAt: column.text(),
      updatedBy: column.optionalText(),
    },
    table('automaticTopUps'),
  );
  Dispute.init(
    {
      id: column.id(),
      teamId: column.text(),
      topUpId: column.text(),
      invoiceId: column.text(),
      lotId: column.text(),
      state: column.text(),
      reason: column.text(),
      totalMinor: column.integer(),
      currency: column.text(),
      coveredMicrocredits: column.integer(),
      frozenMicrocredits: column.integer(),
      takenMicrocredits: column.integer(),
      openedAt: column.text(),
      decidedAt: column.optionalText(),
      problem: column.optionalText(),
      checks: checks(),
      nextCheckAt: column.optionalText(),
    },
    table('disputes'),
  );
  Receivable.init(
    {
      id: column.id(),
      teamId: column.text(),
      disputeId: column.text(),
      invoiceId: column.text(),
      totalMinor: column.integer(),
      currency: column.text(),
      state: column.text(),
      createdAt: column.text(),
      decidedAt: column.optionalText(),
      decidedBy: column.optionalText(),
      reason: column.optionalText(),
    },
    table('receivables'),
  );
}
