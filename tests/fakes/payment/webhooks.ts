/** Tells the application about events: signed, in order, retried with back-off; switches make it misbehave. */
import Stripe from 'stripe';
import type { FakeEvent, Store } from './state.ts';

const signer = new Stripe('local-fake-key');
const firstRetryMs = 400;
const attemptsAtMost = 12;
/** With reordering, events wait this long for later ones. */
const reorderMs = 250;

export class Webhooks {
  #timer: NodeJS.Timeout | undefined;
  #sending = false;
  #closed = false;

  constructor(
    private readonly store: Store,
    private readonly target: { url: string; secret: string },
  ) {}

  /** Records an event about an object as it is now, and schedules its delivery. */
  emit(type: string, object: object, idempotencyKey: string | null = null): FakeEvent {
    const { state } = this.store;
    const event: FakeEvent = {
      id: this.store.id('evt'),
      object: 'event',
      api_version: '2026-10-28.endive',
      created: this.store.now(),
      livemode: false,
      pending_webhooks: 1,
      request: { id: null, idempotency_key: idempotencyKey },
      type,
      data: { object: structuredClone(object) as Record<string, unknown> },
    };
    state.events.push(event);
    const { switches } = state;
    if (switches.lose > 0) switches.lose -= 1;
    else {
      const wait = switches.delayMs + (switches.reorder ? reorderMs : 0);
      for (let copy = 0; copy <= switches.duplicate; copy += 1)
        state.deliveries.push({ eventId: event.id, attempts: 0, dueAtMs: Date.now() + wait });
    }
    this.store.save();
    this.wake();
    return event;
  }

  /** Delivers an event again by hand, whatever happened before. */
  redeliver(eventId: string): void {
    this.store.state.deliveries.push({ eventId, attempts: 0, dueAtMs: Date.now() });
    this.wake();
  }

  wake(): void {
    if (this.#closed || this.#sending) return;
    clearTimeout(this.#timer);
    const due = Math.min(...this.store.state.deliveries.map(({ dueAtMs }) => dueAtMs));
    if (Number.isFinite(due)) this.#timer = setTimeout(() => void this.#send(), Math.max(0, due - Date.now()));
  }

  close(): void {
    this.#closed = true;
    clearTimeout(this.#timer);
  }

  async #send(): Promise<void> {
    this.#sending = true;
    const { state } = this.store;
    // What came within one pause goes together, so that there is something to reverse.
    const horizonMs = Date.now() + (state.switches.reorder ? reorderMs : 0);
    const due = state.deliveries.filter(({ dueAtMs }) => dueAtMs <= horizonMs);
    if (state.switches.reorder) due.reverse();
    for (const delivery of due) {
      const event = state.events.find(({ id }) => id === delivery.eventId);
      const delivered = event ? await this.#post(event) : true;
      delivery.attempts += 1;
      if (delivered || delivery.attempts >= attemptsAtMost)
        state.deliveries.splice(state.deliveries.indexOf(delivery), 1);
      else delivery.dueAtMs = Date.now() + firstRetryMs * 2 ** delivery.attempts;
      if (delivered && event) event.pending_webhooks = 0;
    }
    this.store.save();
    this.#sending = false;
    this.wake();
  }

  async #post(event: FakeEvent): Promise<boolean> {
    const payload = JSON.stringify(event);
    const signature = signer.webhooks.generateTestHeaderString({ payload, secret: this.target.secret });
    try {
      const response = await fetch(this.target.url, {
        method: 'POST',
        headers: { 'Content-Type': 'application/json; charset=utf-8', 'Stripe-Signature': signature },
        body: payload,
        signal: AbortSignal.timeout(10_000),
      });
      await response.arrayBuffer();
      return response.ok;
    } catch {
      return false;
    }
  }
}
