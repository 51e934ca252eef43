/** The payment fake in this process, its webhooks led through the real middleware and endpoint, and a buyer's hand. */
import { createServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import { afterAll } from 'vitest';
import { startPaymentFake, type PaymentFake } from '@tests/fakes/payment/server.ts';
import { callEndpoint } from './call-endpoint.ts';

export const webhookSecret = 'whsec_tests';
export const webhookPath = '/api/v1/webhooks/stripe';

/** Call at the top of a file, before `useTestDatabase({ ...payment.env })`. */
export async function usePaymentFake(): Promise<PaymentFake & { env: Record<string, string> }> {
  const bridge = createServer((request, response) => {
    const chunks: Buffer[] = [];
    request.on('data', (chunk: Buffer) => chunks.push(chunk));
    request.on('end', () => {
      const headers = {
        'Content-Type': request.headers['content-type'] ?? '',
        'Stripe-Signature': String(request.headers['stripe-signature'] ?? ''),
      };
      callEndpoint({ method: 'POST', path: webhookPath, headers, body: Buffer.concat(chunks).toString('utf8') }).then(
        (answer) => response.writeHead(answer.status).end(),
        () => response.writeHead(500).end(),
      );
    });
  });
  await new Promise<void>((resolve) => bridge.listen(0, '127.0.0.1', resolve));
  const { port } = bridge.address() as AddressInfo;
  const fake = await startPaymentFake({ port: 0, webhookUrl: `http://127.0.0.1:${port}`, webhookSecret });
  afterAll(async () => {
    await fake.close();
    bridge.closeAllConnections();
    await new Promise((resolve) => bridge.close(resolve));
  });
  return { ...fake, env: { STRIPE_FAKE_URL: fake.url, STRIPE_WEBHOOK_SECRET: webhookSecret } };
}

/** Sends a form of the hosted page as a browser would; answers status and where it leads. */
export async function submit(
  url: string,
  fields: Record<string, string>,
): Promise<{ status: number; location: string; text: string }> {
  const response = await fetch(url, {
    method: 'POST',
    headers: { 'Content-Type': 'application/x-www-form-urlencoded', Accept: 'text/html' },
    body: new URLSearchParams(fields).toString(),
    redirect: 'manual',
  });
  return { status: response.status, location: response.headers.get('location') ?? '', text: await response.text() };
}

export { cards } from './payment-cards.ts';

export const payByCard = (checkoutUrl: string, card: string) => submit(checkoutUrl, { way: 'card', card });
