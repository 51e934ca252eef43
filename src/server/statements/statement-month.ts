/** Which month a statement is of: the one asked for, or the present one; one that has not begun is refused. */
import { monthIn, monthSpan } from '@/domain/billing/month-start.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { nowMs } from '../clock.ts';

export interface StatementMonth {
  month: string;
  startsAt: string;
  endsAt: string;
  complete: boolean;
}

export function statementMonth(asked: string | undefined, timeZone: string): Result<StatementMonth> {
  const present = monthIn(nowMs(), timeZone);
  const month = asked ?? present;
  if (month > present) {
    const message = `${month} has not begun. The newest statement is that of ${present}.`;
    return refuse('invalid_input', message, { errors: [{ path: 'query.month', code: 'in_the_future', message }] });
  }
  const { fromMs, toMs } = monthSpan(month, timeZone);
  return accept({
    month,
    startsAt: new Date(fromMs).toISOString(),
    endsAt: new Date(toMs).toISOString(),
    complete: month < present,
  });
}
