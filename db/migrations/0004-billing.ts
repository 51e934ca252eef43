/** Top-ups, payment events, invoices, pro-formas, number series, tax rates. */
import type { Migration } from '../migrate.ts';

export const billing: Migration = {
  name: '0004-billing',
  statements: [],
};
