/** What the fake holds: payments received, less refunds, less what disputes took and have not given back. */
import type { State } from './state.ts';

export function heldBy(state: State): { currency: string; amount: number }[] {
  const held = new Map<string, number>();
  const add = (currency: string, amount: number) => held.set(currency, (held.get(currency) ?? 0) + amount);
  for (const { status, currency, amount_received } of Object.values(state.intents))
    if (status === 'succeeded') add(currency, amount_received);
  for (const { status, currency, amount } of Object.values(state.refunds))
    if (status === 'succeeded') add(currency, -amount);
  for (const { status, currency, amount } of Object.values(state.disputes))
    if (status !== 'won') add(currency, -amount);
  return [...held].map(([currency, amount]) => ({ currency, amount }));
}
