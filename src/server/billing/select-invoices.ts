/** The invoices of a team that filters let through, newest first. */
import { Op, QueryTypes } from 'sequelize';
import { database } from '@db/connection.ts';
import { Invoice } from '@db/models/billing.ts';
import type { InvoiceFilters } from '@/contracts/invoices.ts';
import { dayStartMs } from '@/domain/billing/month-start.ts';

/** By the jobs that their credits paid for. */
const paidForCode = `coalesce(topUpId, proFormaId) IN (
  SELECT lots.purchaseId FROM jobs JOIN projectCodes ON projectCodes.id = jobs.projectCodeId
  JOIN ledgerTransactions AS own ON own.jobId = jobs.id AND own.kind = 'settlement'
  JOIN lotDraws ON lotDraws.transactionSequence = own.sequence JOIN lots ON lots.id = lotDraws.lotId
  WHERE jobs.teamId = $teamId AND (projectCodes.id = $projectCode OR projectCodes.code = $projectCode))`;

const conditions: Record<keyof InvoiceFilters, string> = {
  review: `$review = coalesce((SELECT state FROM invoiceReviews WHERE invoiceId = invoices.id ORDER BY id DESC LIMIT 1), 'to_review')`,
  kind: `kind = $kind`,
  from: `issuedAt >= $from`,
  to: `issuedAt < $to`,
  search: `instr(lower(number || ' ' || (buyer ->> 'name') || ' ' || coalesce(purchaseOrder, '') || ' ' || lines), lower($search)) > 0`,
  member: `$member IN (SELECT userId FROM topUps WHERE id = topUpId UNION SELECT userId FROM proFormas WHERE id = proFormaId)`,
  projectCode: paidForCode,
};

export async function selectInvoices(options: {
  team: { id: string; timeZone: string };
  filters: InvoiceFilters;
  /** The last id seen. */
  cursor?: string | undefined;
  count: number;
}): Promise<Invoice[]> {
  const { team, filters, cursor, count } = options;
  const instant = (day: string, later = 0) => new Date(dayStartMs(day, team.timeZone, later)).toISOString();
  const { from, to, ...rest } = filters;
  const wanted = {
    ...rest,
    ...(from ? { from: instant(from) } : {}),
    ...(to ? { to: instant(to, 1) } : {}),
  };
  const bind = Object.fromEntries(Object.entries(wanted).filter(([, value]) => value !== undefined && value !== ''));
  const where = Object.keys(bind).map((name) => `AND ${conditions[name as keyof InvoiceFilters]}`);
  const rows = await database().query<{ id: string }>(
    `SELECT id FROM invoices WHERE teamId = $teamId AND ($cursor IS NULL OR id < $cursor) ${where.join(' ')}
     ORDER BY id DESC LIMIT $count`,
    { type: QueryTypes.SELECT, bind: { ...bind, teamId: team.id, cursor: cursor ?? null, count } },
  );
  return Invoice.findAll({ where: { id: { [Op.in]: rows.map(({ id }) => id) } }, order: [['id', 'DESC']] });
}
