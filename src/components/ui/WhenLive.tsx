/**
 * Holds the controls of an island disabled until it is live. Pages come ready to read from the server, but what is
 * typed or clicked before the script has taken over would be lost without a word.
 */
import { useSyncExternalStore, type ReactNode } from 'react';

const never = () => () => undefined;

/** False on the server and in the first render in the browser, true from then on. */
const useLive = (): boolean =>
  useSyncExternalStore(
    never,
    () => true,
    () => false,
  );

export function WhenLive({ children }: { children: ReactNode }) {
  return (
    <fieldset role="presentation" className="contents" disabled={!useLive()}>
      {children}
    </fieldset>
  );
}
