/** The quote for what the form says: asked half a second after the last change, the last answer kept in sight meanwhile. */
import { keepPreviousData, useQuery } from '@tanstack/react-query';
import { useEffect, useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { announceQuote } from '@/components/ui/column-events.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { createQuote, type QuoteDocument } from '@/contracts/jobs.ts';
import type { QuoteRequestBody } from './launch-settings.ts';

const askAfterMs = 500;
/** A quote this near its end is asked for again. */
const leastLifeMs = 60_000;

class Refused extends Error {
  constructor(readonly problem: ProblemDocument) {
    super(problem.detail);
  }
}

export interface QuoteState {
  quote: QuoteDocument | null;
  /** The quote on screen is not (or not yet) the answer to what the form says now. */
  stale: boolean;
  asking: boolean;
  problem: ProblemDocument | null;
  askAgain: () => void;
}

/** `request` null: the form has faults, so nothing is asked. */
export function useQuote(team: string, request: QuoteRequestBody | null): QuoteState {
  const wanted = request === null ? null : JSON.stringify(request);
  const [settled, setSettled] = useState(wanted);
  useEffect(() => {
    if (wanted === settled) return;
    const timer = setTimeout(() => setSettled(wanted), askAfterMs);
    return () => clearTimeout(timer);
  }, [wanted, settled]);

  const query = useQuery({
    queryKey: ['quote', team, settled],
    enabled: settled !== null,
    placeholderData: keepPreviousData,
    staleTime: Infinity,
    gcTime: 30 * 60_000,
    retry: false,
    refetchOnWindowFocus: false,
    queryFn: async ({ signal }) => {
      const called = await callApi(createQuote, {
        path: { team },
        body: JSON.parse(settled!) as QuoteRequestBody,
        signal,
      });
      if (!called.ok) throw new Refused(called.problem);
      return called.value.quote;
    },
  });
  const quote = query.data ?? null;
  const { refetch } = query;
  const stale = wanted !== settled || query.isPlaceholderData || query.isError || wanted === null;

  useEffect(() => {
    if (quote === null) return;
    const left = Date.parse(quote.expiresAt) - Date.now() - leastLifeMs;
    const timer = setTimeout(() => void refetch(), Math.max(1_000, left));
    return () => clearTimeout(timer);
  }, [quote, refetch]);

  useEffect(() => {
    announceQuote(
      quote !== null && !stale
        ? { expectedMicrocredits: quote.microcredits.expected, highMicrocredits: quote.microcredits.high }
        : null,
    );
  }, [quote, stale]);
  useEffect(() => () => announceQuote(null), []);

  return {
    quote,
    stale,
    asking: query.isFetching || (wanted !== null && wanted !== settled),
    problem: query.error instanceof Refused && wanted === settled ? query.error.problem : null,
    askAgain: () => void refetch(),
  };
}
