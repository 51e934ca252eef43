/** Rows of the ledger, lots and price books. */
import type { Sequelize } from 'sequelize';

export function defineLedger(_sequelize: Sequelize): void {}
