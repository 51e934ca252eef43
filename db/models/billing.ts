/** Rows of billing details, top-ups, payment events, invoices and pro-formas. */
import {
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { TaxDecision } from '@/domain/billing/decide-tax.ts';
import type { InvoiceLine, InvoiceTax, Party } from '@/domain/billing/invoice-face.ts';
import { column } from './columns.ts';

type Attributes<M extends Model> = InferAttributes<M>;
type Creation<M extends Model> = InferCreationAttributes<M>;

export class BillingDetailsRow extends Model<Attributes<BillingDetailsRow>, Creation<BillingDetailsRow>> {
  declare teamId: string;
  declare name: string;
  declare address: string;
  declare country: string;
  declare vatNumber: string | null;
  declare email: string | null;
  declare updatedAt: string;
  declare updatedBy: string | null;
}

export class PaymentCustomer extends Model<Attributes<PaymentCustomer>, Creation<PaymentCustomer>> {
  declare teamId: string;
  declare idempotencyKey: string;
  declare customerId: CreationOptional<string | null>;
  declare createdAt: string;
}

export type TopUpState = 'pending' | 'processing' | 'paid' | 'failed' | 'expired';

export class TopUp extends Model<Attributes<TopUp>, Creation<TopUp>> {
  declare id: string;
  declare teamId: string;
  declare userId: string | null;
  declare requestKey: CreationOptional<string | null>;
  declare state: TopUpState;
  declare pack: string;
  declare priceBookId: string;
  declare creditsMicrocredits: number;
  declare currency: string;
  declare netMinor: number;
  declare taxMinor: number;
  declare totalMinor: number;
  declare tax: TaxDecision;
  declare buyer: Party;
  declare customerId: CreationOptional<string | null>;
  declare idempotencyKey: string;
  declare sessionId: CreationOptional<string | null>;
  declare checkoutUrl: CreationOptional<string | null>;
  declare paymentIntentId: CreationOptional<string | null>;
  declare problem: CreationOptional<string | null>;
  declare createdAt: string;
  declare expiresAt: string;
  declare paidAt: CreationOptional<string | null>;
  declare checks: CreationOptional<number>;
  declare nextCheckAt: CreationOptional<string | null>;
  /** `automatic`: a saved card is charged, nobody visits a page. */
  declare way: CreationOptional<'checkout' | 'automatic'>;
  declare paymentMethodId: CreationOptional<string | null>;
}

export class PaymentEvent extends Model<Attributes<PaymentEvent>, Creation<PaymentEvent>> {
  declare id: string;
  declare type: string;
  declare objectId: string | null;
  declare topUpId: string | null;
  declare cardSetupId: CreationOptional<string | null>;
  declare disputeId: CreationOptional<string | null>;
  declare receivedAt: string;
  declare state: 'recorded' | 'handled' | 'ignored';
  declare outcome: CreationOptional<string | null>;
  declare attempts: CreationOptional<number>;
}

/** What invoices and pro-formas share: frozen when issued. */
abstract class Face<M extends Model> extends Model<Attributes<M>, Creation<M>> {
  declare series: string;
  declare year: number;
  declare numberInYear: number;
  declare number: string;
  declare teamId: string;
  declare issuedAt: string;
  declare currency: string;
  declare netMinor: number;
  declare taxMinor: number;
  declare totalMinor: number;
  declare creditsMicrocredits: number;
  declare seller: Party;
  declare buyer: Party;
  declare lines: InvoiceLine[];
  declare taxes: InvoiceTax[];
  declare notes: string[];
  declare purchaseOrder: string | null;
}

export class Invoice extends Face<Invoice> {
  declare id: string;
  declare kind: 'invoice' | 'credit_note';
  declare taxPoint: string;
  declare paidAt: string;
  declare topUpId: string | null;
  declare proFormaId: string | null;
  declare correctsInvoiceId: string | null;
}

export class ProForma extends Face<ProForma> {
  declare id: string;
  declare state: 'open' | 'paid' | 'expired' | 'cancelled';
  declare userId: string | null;
  declare pack: string;
  declare priceBookId: string;
  declare tax: TaxDecision;
  declare termsDays: number;
  declare dueAt: string;
  declare decidedAt: CreationOptional<string | null>;
}

/** Says that the receipt of an invoice is in the outbox. */
export class InvoiceReceipt extends Model<Attributes<InvoiceReceipt>, Creation<InvoiceReceipt>> {
  declare invoiceId: string;
  declare queuedAt: string;
}

export class InvoiceReview extends Model<Attributes<InvoiceReview>, Creation<InvoiceReview>> {
  declare id: string;
  declare invoiceId: string;
  declare userId: string | null;
  declare state: 'to_review' | 'questioned' | 'approved';
  declare comment: string;
  declare at: string;
}

/** Credits of a lot taken back, with their credit note and how the money goes. */
export class CreditReturn extends Model<Attributes<CreditReturn>, Creation<CreditReturn>> {
  declare id: string;
  declare teamId: string;
  declare cause: 'refund' | 'dispute';
  declare lotId: string;
  declare invoiceId: string;
  declare creditNoteId: string;
  declare amountMicrocredits: number;
  declare netMinor: number;
  declare taxMinor: number;
  declare totalMinor: number;
  declare currency: string;
  declare reason: string;
  declare userId: string | null;
  declare state: 'pending' | 'sent' | 'failed' | 'by_transfer' | 'taken';
  declare paymentIntentId: string | null;
  declare idempotencyKey: string;
  declare serviceRefundId: CreationOptional<string | null>;
  declare problem: CreationOptional<string | null>;
  declare createdAt: string;
  declare sentAt: CreationOptional<string | null>;
}

export class TaxRateRow extends Model<Attributes<TaxRateRow>, Creation<TaxRateRow>> {
  declare country: string;
  declare rateHundredths: number;
  declare validFrom: string;
}

export class ExchangeRateRow extends Model<Attributes<ExchangeRateRow>, Creation<ExchangeRateRow>> {
  declare fromCurrency: string;
  declare toCurrency: string;
  declare rateMillionths: number;
  declare validFrom: string;
}

const face = () => ({
  series: column.text(),
  year: column.integer(),
  numberInYear: column.integer(),
  number: column.text(),
  teamId: column.text(),
  issuedAt: column.text(),
  currency: column.text(),
  netMinor: column.integer(),
  taxMinor: column.integer(),
  totalMinor: column.integer(),
  creditsMicrocredits: column.integer(),
  seller: column.json('seller'),
  buyer: column.json('buyer'),
  lines: column.json('lines'),
  taxes: column.json('taxes'),
  notes: column.json('notes'),
  purchaseOrder: column.optionalText(),
});

export function defineBilling(sequelize: Sequelize): void {
  const table = (tableName: string) => ({ sequelize, tableName, timestamps: false });
  const primary = { primaryKey: true };
  BillingDetailsRow.init(
    {
      teamId: column.id(),
      name: column.text(),
      address: column.text(),
      country: column.text(),
      vatNumber: column.optionalText(),
      email: column.optionalText(),
      updatedAt: column.text(),
      updatedBy: column.optionalText(),
    },
    table('billingDetails'),
  );
  PaymentCustomer.init(
    {
      teamId: column.id(),
      idempotencyKey: column.text(),
      customerId: column.optionalText(),
      createdAt: column.text(),
    },
    table('paymentCustomers'),
  );
  TopUp.init(
    {
      id: column.id(),
      teamId: column.text(),
      userId: column.optionalText(),
      requestKey: column.optionalText(),
      state: column.text(),
      pack: column.text(),
      priceBookId: column.text(),
      creditsMicrocredits: column.integer(),
      currency: column.text(),
      netMinor: column.integer(),
      taxMinor: column.integer(),
      totalMinor: column.integer(),
      tax: column.json('tax'),
      buyer: column.json('buyer'),
      customerId: column.optionalText(),
      idempotencyKey: column.text(),
      sessionId: column.optionalText(),
      checkoutUrl: column.optionalText(),
      paymentIntentId: column.optionalText(),
      problem: column.optionalText(),
      createdAt: column.text(),
      expiresAt: column.text(),
      paidAt: column.optionalText(),
      checks: { ...column.integer(), defaultValue: 0 },
      nextCheckAt: column.optionalText(),
      way: { ...column.text(), defaultValue: 'checkout' },
      paymentMethodId: column.optionalText(),
    },
    table('topUps'),
  );
  PaymentEvent.init(
    {
      id: column.id(),
      type: column.text(),
      objectId: column.optionalText(),
      topUpId: column.optionalText(),
      cardSetupId: column.optionalText(),
      disputeId: column.optionalText(),
      receivedAt: column.text(),
      state: column.text(),
      outcome: column.optionalText(),
      attempts: { ...column.integer(), defaultValue: 0 },
    },
    table('paymentEvents'),
  );
  Invoice.init(
    {
      id: column.id(),
      kind: column.text(),
      ...face(),
      taxPoint: column.text(),
      paidAt: column.text(),
      topUpId: column.optionalText(),
      proFormaId: column.optionalText(),
      correctsInvoiceId: column.optionalText(),
    },
    table('invoices'),
  );
  ProForma.init(
    {
      id: column.id(),
      ...face(),
      state: column.text(),
      userId: column.optionalText(),
      pack: column.text(),
      priceBookId: column.text(),
      tax: column.json('tax'),
      termsDays: column.integer(),
      dueAt: column.text(),
      decidedAt: column.optionalText(),
    },
    table('proFormas'),
  );
  InvoiceReceipt.init({ invoiceId: column.id(), queuedAt: column.text() }, table('invoiceReceipts'));
  InvoiceReview.init(
    {
      id: column.id(),
      invoiceId: column.text(),
      userId: column.optionalText(),
      state: column.text(),
      comment: column.text(),
      at: column.text(),
    },
    table('invoiceReviews'),
  );
  CreditReturn.init(
    {
      id: column.id(),
      teamId: column.text(),
      cause: column.text(),
      lotId: column.text(),
      invoiceId: column.text(),
      creditNoteId: column.text(),
      amountMicrocredits: column.integer(),
      netMinor: column.integer(),
      taxMinor: column.integer(),
      totalMinor: column.integer(),
      currency: column.text(),
      reason: column.text(),
      userId: column.optionalText(),
      state: column.text(),
      paymentIntentId: column.optionalText(),
      idempotencyKey: column.text(),
      serviceRefundId: column.optionalText(),
      problem: column.optionalText(),
      createdAt: column.text(),
      sentAt: column.optionalText(),
    },
    table('creditReturns'),
  );
  TaxRateRow.init(
    {
      country: { ...column.text(), ...primary },
      rateHundredths: column.integer(),
      validFrom: { ...column.text(), ...primary },
    },
    table('taxRates'),
  );
  ExchangeRateRow.init(
    {
      fromCurrency: { ...column.text(), ...primary },
      toCurrency: { ...column.text(), ...primary },
      rateMillionths: column.integer(),
      validFrom: { ...column.text(), ...primary },
    },
    table('exchangeRates'),
  );
}
