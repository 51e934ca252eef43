/** The team's credits on every app page: the column along the left edge, or a bar on top of a phone's page. */
import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useEffect, useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { readCredits } from '@/contracts/ledger.ts';
import { paths } from '@/paths.ts';
import { creditsText } from './amounts-text.ts';
import { balanceEvent, quoteEvent, quoteOnScreen, type QuoteOnScreen } from './column-events.ts';
import { GraduatedBar } from './GraduatedBar.tsx';
import { GraduatedColumn } from './GraduatedColumn.tsx';
import { QueryProvider } from './QueryProvider.tsx';

export interface CreditRailProps {
  team: string;
  availableMicrocredits: number;
  heldMicrocredits: number;
  shareLeftMicrocredits?: number | null;
}
type Balance = Pick<CreditRailProps, 'availableMicrocredits' | 'heldMicrocredits'>;

/** While jobs hold credits the level moves by itself. */
const refreshWhileHeldMs = 15_000;

export function CreditRail(props: CreditRailProps) {
  return (
    <QueryProvider>
      <Rail {...props} />
    </QueryProvider>
  );
}

function Rail({ team, availableMicrocredits, heldMicrocredits, shareLeftMicrocredits }: CreditRailProps) {
  const quote = useQuoteOnScreen();
  const balance = useBalance(team, { availableMicrocredits, heldMicrocredits });
  const levels = { ...balance, quote, shareLeftMicrocredits };
  const available = creditsText(balance.availableMicrocredits, 'down');
  return (
    <>
      <div className="flex items-center gap-3 border-b border-rule bg-glass px-4 pb-1 pt-1.5 lg:hidden">
        <a href={paths.credits(team)} className="shrink-0 leading-tight">
          <b className="block text-base font-bold">{available}</b>
          <span className="block text-[11px] text-soft">credits free</span>
        </a>
        <div className="min-w-0 grow">
          <GraduatedBar {...levels} />
        </div>
      </div>
      <div className="sticky top-0 hidden h-screen min-h-[30rem] flex-col bg-glass pb-14 lg:flex">
        <a href={paths.credits(team)} className="block px-4 pb-5 pt-3 leading-tight">
          <b className="block text-lg font-bold leading-6">{available}</b>
          <span className="block text-[11px] text-soft">credits free</span>
        </a>
        <div className="min-h-0 grow">
          <GraduatedColumn {...levels} />
        </div>
      </div>
    </>
  );
}

function useQuoteOnScreen(): QuoteOnScreen | null {
  const [quote, setQuote] = useState<QuoteOnScreen | null>(null);
  useEffect(() => {
    const listen = (event: Event): void => setQuote((event as CustomEvent<QuoteOnScreen | null>).detail);
    window.addEventListener(quoteEvent, listen);
    setQuote(quoteOnScreen());
    return () => window.removeEventListener(quoteEvent, listen);
  }, []);
  return quote;
}

function useBalance(team: string, initialData: Balance): Balance {
  const queries = useQueryClient();
  const { data } = useQuery({
    queryKey: ['credits', team],
    queryFn: ({ signal }) => readBalance(team, signal),
    initialData,
    refetchInterval: (query) => ((query.state.data?.heldMicrocredits ?? 0) > 0 ? refreshWhileHeldMs : false),
  });
  useEffect(() => {
    const refresh = (): void => void queries.invalidateQueries({ queryKey: ['credits', team] });
    window.addEventListener(balanceEvent, refresh);
    return () => window.removeEventListener(balanceEvent, refresh);
  }, [queries, team]);
  return data;
}

async function readBalance(team: string, signal: AbortSignal): Promise<Balance> {
  const called = await callApi(readCredits, { path: { team }, signal });
  if (!called.ok) throw new Error(called.problem.detail);
  return called.value;
}
