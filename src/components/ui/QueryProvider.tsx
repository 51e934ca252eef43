/** TanStack Query for one island. All islands of a page share one cache. */
import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import type { ReactNode } from 'react';

let shared: QueryClient | undefined;

function client(): QueryClient {
  const make = (): QueryClient =>
    new QueryClient({ defaultOptions: { queries: { staleTime: 5_000, retry: 1, refetchOnWindowFocus: true } } });
  // On the server every render gets its own, so that nothing passes from one person to another.
  if (typeof window === 'undefined') return make();
  return (shared ??= make());
}

export function QueryProvider({ children }: { children: ReactNode }) {
  return <QueryClientProvider client={client()}>{children}</QueryClientProvider>;
}
