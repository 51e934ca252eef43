/** Rows of top-ups, payment events, invoices and pro-formas. */
import type { Sequelize } from 'sequelize';

export function defineBilling(_sequelize: Sequelize): void {}
