/**
 * The way to the payment service. With STRIPE_SECRET_KEY the hosted one; without it the local fake at
 * STRIPE_FAKE_URL, over HTTP through the same SDK. Only the `payment-…` files import the SDK.
 */
import Stripe from 'stripe';
import { accept, refuse, type Refusal, type Result } from '@/domain/refusals.ts';
import { env, type Env } from '../env.ts';
import { log } from '../log.ts';

const unavailable = (): Refusal =>
  refuse(
    'payment_service_unavailable',
    'The payment service cannot be reached. Nothing was charged; try again in a few minutes.',
  );

let made: { env: Env; stripe: Stripe } | undefined;

/** Made anew when the environment changes, as it does between tests. Null when no service is configured. */
export function paymentClient(): Stripe | null {
  const settings = env();
  if (made?.env === settings) return made.stripe;
  const common = { timeout: 20_000, maxNetworkRetries: 1, telemetry: false, appInfo: { name: 'Burette' } };
  if (settings.STRIPE_SECRET_KEY) made = { env: settings, stripe: new Stripe(settings.STRIPE_SECRET_KEY, common) };
  else if (settings.STRIPE_FAKE_URL) {
    const { hostname, port, protocol } = new URL(settings.STRIPE_FAKE_URL);
    made = {
      env: settings,
      stripe: new Stripe('practice-key', {
        ...common,
        host: hostname,
        port: port || (protocol === 'https:' ? '443' : '80'),
        protocol: protocol === 'https:' ? 'https' : 'http',
      }),
    };
  } else return null;
  return made.stripe;
}

/** An outage of the service is a refusal; a request that it finds wrong is our bug and thrown. */
export async function callService<T>(name: string, work: (stripe: Stripe) => Promise<T>): Promise<Result<T>> {
  const stripe = paymentClient();
  if (!stripe) {
    log().error('no payment service is configured: set STRIPE_SECRET_KEY or STRIPE_FAKE_URL');
    return unavailable();
  }
  try {
    return accept(await work(stripe));
  } catch (error) {
    const outage =
      error instanceof Stripe.errors.StripeConnectionError ||
      error instanceof Stripe.errors.StripeAPIError ||
      error instanceof Stripe.errors.StripeRateLimitError ||
      error instanceof Stripe.errors.StripeAuthenticationError;
    if (!outage) throw error;
    log().warn({ err: error, call: name }, 'payment service call failed');
    return unavailable();
  }
}

export const idOf = (value: string | { id: string } | null | undefined): string | null =>
  typeof value === 'string' ? value : (value?.id ?? null);
