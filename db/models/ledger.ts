/** Rows of the ledger, lots and price books. */
import { Model, type InferAttributes, type InferCreationAttributes, type Sequelize } from 'sequelize';
import type { Account, TransactionKind } from '@/domain/ledger/accounts.ts';
import type { LotSource } from '@/domain/ledger/lots.ts';
import type { CreditPack, PriceBook } from '@/domain/pricing/price-book.ts';
import { column } from './columns.ts';

/** `postings`, `lots`, `draws` and `memo` are JSON text, kept as text because the hash is taken over these very bytes. */
export class LedgerTransaction extends Model<
  InferAttributes<LedgerTransaction>,
  InferCreationAttributes<LedgerTransaction>
> {
  declare sequence: number;
  declare id: string;
  declare transactionKey: string;
  declare kind: TransactionKind;
  declare occurredAt: string;
  declare teamId: string;
  declare jobId: string | null;
  declare segmentId: string | null;
  declare userId: string | null;
  declare segmentHeldMicrocredits: number | null;
  declare segmentSpentMicrocredits: number | null;
  declare postings: string;
  declare lots: string;
  declare draws: string;
  declare memo: string;
  declare previousHash: string;
  declare hash: string;
}

/** Made by a trigger from its transaction; never inserted directly. */
export class LedgerPosting extends Model<InferAttributes<LedgerPosting>, InferCreationAttributes<LedgerPosting>> {
  declare transactionSequence: number;
  declare teamId: string;
  declare account: Account;
  declare amountMicrocredits: number;
  declare balanceMicrocredits: number;
}

/** Made by a trigger from its transaction; never inserted directly. */
export class Lot extends Model<InferAttributes<Lot>, InferCreationAttributes<Lot>> {
  declare id: string;
  declare transactionSequence: number;
  declare teamId: string;
  declare source: LotSource;
  declare creditsMicrocredits: number;
  declare netMinor: number;
  declare currency: string | null;
  declare purchaseId: string | null;
}

/** Made by a trigger from its transaction; never inserted directly. */
export class LotDrawRow extends Model<InferAttributes<LotDrawRow>, InferCreationAttributes<LotDrawRow>> {
  declare lotId: string;
  declare transactionSequence: number;
  declare amountMicrocredits: number;
  declare remainingMicrocredits: number;
  declare frozenChangeMicrocredits: number;
  declare frozenMicrocredits: number;
}

export class LedgerCheckpoint extends Model<
  InferAttributes<LedgerCheckpoint>,
  InferCreationAttributes<LedgerCheckpoint>
> {
  declare id: number | null;
  declare sequence: number;
  declare hash: string;
  declare verifiedAt: string;
}

export class PriceBookRow extends Model<InferAttributes<PriceBookRow>, InferCreationAttributes<PriceBookRow>> {
  declare id: string;
  declare version: number;
  declare startsAt: string;
  declare microcreditsPerMillionEvents: PriceBook['microcreditsPerMillionEvents'];
  declare packs: CreditPack[];
  declare createdAt: string;
}

export function defineLedger(sequelize: Sequelize): void {
  const primary = { primaryKey: true };
  LedgerTransaction.init(
    {
      sequence: { ...column.integer(), ...primary },
      id: column.text(),
      transactionKey: column.text(),
      kind: column.text(),
      occurredAt: column.text(),
      teamId: column.text(),
      jobId: column.optionalText(),
      segmentId: column.optionalText(),
      userId: column.optionalText(),
      segmentHeldMicrocredits: column.optionalInteger(),
      segmentSpentMicrocredits: column.optionalInteger(),
      postings: column.text(),
      lots: column.text(),
      draws: column.text(),
      memo: column.text(),
      previousHash: column.text(),
      hash: column.text(),
    },
    { sequelize, tableName: 'ledgerTransactions', timestamps: false },
  );
  LedgerPosting.init(
    {
      transactionSequence: { ...column.integer(), ...primary },
      teamId: { ...column.text(), ...primary },
      account: { ...column.text(), ...primary },
      amountMicrocredits: column.integer(),
      balanceMicrocredits: column.integer(),
    },
    { sequelize, tableName: 'ledgerPostings', timestamps: false },
  );
  Lot.init(
    {
      id: column.id(),
      transactionSequence: column.integer(),
      teamId: column.text(),
      source: column.text(),
      creditsMicrocredits: column.integer(),
      netMinor: column.integer(),
      currency: column.optionalText(),
      purchaseId: column.optionalText(),
    },
    { sequelize, tableName: 'lots', timestamps: false },
  );
  LotDrawRow.init(
    {
      lotId: { ...column.text(), ...primary },
      transactionSequence: { ...column.integer(), ...primary },
      amountMicrocredits: column.integer(),
      remainingMicrocredits: column.integer(),
      frozenChangeMicrocredits: column.integer(),
      frozenMicrocredits: column.integer(),
    },
    { sequelize, tableName: 'lotDraws', timestamps: false },
  );
  LedgerCheckpoint.init(
    {
      id: { ...column.optionalInteger(), ...primary },
      sequence: column.integer(),
      hash: column.text(),
      verifiedAt: column.text(),
    },
    { sequelize, tableName: 'ledgerCheckpoints', timestamps: false },
  );
  PriceBookRow.init(
    {
      id: column.id(),
      version: column.integer(),
      startsAt: column.text(),
      microcreditsPerMillionEvents: column.json('microcreditsPerMillionEvents'),
      packs: column.json('packs'),
      createdAt: column.text(),
    },
    { sequelize, tableName: 'priceBooks', timestamps: false },
  );
}
