/** Opaque identifiers: a prefix that tells the kind, then a ULID, so that rows sort by creation. */
import { ulid } from 'ulid';

export type IdKind =
  | 'user'
  | 'team'
  | 'membership'
  | 'link'
  | 'token'
  | 'model'
  | 'version'
  | 'pilot'
  | 'quote'
  | 'job'
  | 'segment'
  | 'batch'
  | 'project'
  | 'transaction'
  | 'lot'
  | 'topup'
  | 'invoice'
  | 'proforma'
  | 'return'
  | 'setup'
  | 'receivable'
  | 'mail'
  | 'payment'
  | 'request'
  | 'pricebook'
  | 'message'
  | 'act'
  | 'webhook'
  | 'delivery';

export const newId = (kind: IdKind): string => `${kind}_${ulid()}`;
