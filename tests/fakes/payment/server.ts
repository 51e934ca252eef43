/** The fake as an HTTP server: the API under /v1, the hosted page under /pay, its controls under /_fake. */
import { createServer, type IncomingMessage, type Server, type ServerResponse } from 'node:http';
import type { AddressInfo } from 'node:net';
import { decideDispute, openDispute } from './api-reversals.ts';
import type { ApiContext } from './api-call.ts';
import { routeOf } from './api.ts';
import { ApiFailure } from './failures.ts';
import { readForm, textOf, type Form } from './form-body.ts';
import { authenticatePage, closedPage, controlPage, notFoundPage, payPage } from './pages.ts';
import { Payments, type Attempt } from './payments.ts';
import { calm, Store, type FakeSession } from './state.ts';
import { Webhooks } from './webhooks.ts';

export interface PaymentFake {
  url: string;
  store: Store;
  webhooks: Webhooks;
  payments: Payments;
  close(): Promise<void>;
}

/** `port` 0 takes a free one. `stateFile` makes it survive a restart. */
export async function startPaymentFake(options: {
  port: number;
  webhookUrl: string;
  webhookSecret: string;
  stateFile?: string | undefined;
}): Promise<PaymentFake> {
  const store = new Store(options.stateFile);
  const webhooks = new Webhooks(store, { url: options.webhookUrl, secret: options.webhookSecret });
  const payments = new Payments(store, webhooks);
  const context: ApiContext = { store, payments, webhooks, baseUrl: '' };
  const server = createServer((request, response) => {
    answer(context, request, response).catch((error: unknown) => {
      response.writeHead(500, { 'Content-Type': 'text/plain' }).end(error instanceof Error ? error.message : 'failed');
    });
  });
  await new Promise<void>((resolve, reject) => {
    server.once('error', reject);
    server.listen(options.port, '127.0.0.1', resolve);
  });
  context.baseUrl = `http://localhost:${(server.address() as AddressInfo).port}`;
  webhooks.wake();
  return {
    url: context.baseUrl.replace('localhost', '127.0.0.1'),
    store,
    webhooks,
    payments,
    close: () => close(server, webhooks),
  };
}

async function close(server: Server, webhooks: Webhooks): Promise<void> {
  webhooks.close();
  server.closeAllConnections();
  await new Promise((resolve) => server.close(resolve));
}

async function answer(context: ApiContext, request: IncomingMessage, response: ServerResponse): Promise<void> {
  const url = new URL(request.url ?? '/', context.baseUrl);
  const chunks: Buffer[] = [];
  for await (const chunk of request) chunks.push(chunk as Buffer);
  const body = Buffer.concat(chunks).toString('utf8');
  context.payments.passTime();
  if (url.pathname.startsWith('/v1/')) answerApi(context, request, response, url, body);
  else if (url.pathname.startsWith('/_fake')) answerControls(context, request, response, url, readForm(body));
  else answerPage(context, request, response, url, readForm(body));
  context.store.save();
}

function answerApi(
  context: ApiContext,
  request: IncomingMessage,
  response: ServerResponse,
  url: URL,
  body: string,
): void {
  const { state } = context.store;
  const send = (status: number, text: string) =>
    response.writeHead(status, { 'Content-Type': 'application/json', 'Request-Id': context.store.id('req') }).end(text);
  const fail = ({ status, body: error }: ApiFailure) => send(status, JSON.stringify({ error }));
  if (!/^Bearer \S+$/.test(request.headers.authorization ?? ''))
    return void fail(
      new ApiFailure(401, { type: 'invalid_request_error', message: 'You did not provide an API key.' }),
    );
  if (state.switches.failNext > 0) {
    state.switches.failNext -= 1;
    return void fail(new ApiFailure(500, { type: 'api_error', message: 'An unknown error occurred' }));
  }
  const route = routeOf(request.method ?? 'GET', url.pathname);
  if (!route)
    return void fail(
      new ApiFailure(404, {
        type: 'invalid_request_error',
        message: `Unrecognized request URL (${request.method}: ${url.pathname}).`,
      }),
    );
  const key = request.method === 'POST' ? ((request.headers['idempotency-key'] as string | undefined) ?? null) : null;
  const fingerprint = `${request.method} ${url.pathname} ${body}`;
  const earlier = key ? state.answers[key] : undefined;
  if (earlier && earlier.request !== fingerprint)
    return void fail(
      new ApiFailure(400, {
        type: 'idempotency_error',
        message: 'Keys for idempotent requests can only be used with the same parameters they were first used with.',
      }),
    );
  const result = earlier ?? perform();
  if (key && !earlier) state.answers[key] = { request: fingerprint, ...result };
  if (state.switches.stallNext > 0) {
    state.switches.stallNext -= 1;
    return;
  }
  if (state.switches.hangNext > 0) {
    state.switches.hangNext -= 1;
    return void request.socket.destroy();
  }
  send(result.status, result.body);

  function perform(): { status: number; body: string } {
    try {
      const call = { ids: route?.ids ?? [], form: readForm(body), query: url.searchParams, idempotencyKey: key };
      return { status: 200, body: JSON.stringify(route?.handler(context, call)) };
    } catch (error) {
      if (!(error instanceof ApiFailure)) throw error;
      return { status: error.status, body: JSON.stringify({ error: error.body }) };
    }
  }
}

const sendPage = (response: ServerResponse, status: number, html: string): void =>
  void response
    .writeHead(status, { 'Content-Type': 'text/html; charset=utf-8', 'Cache-Control': 'no-store' })
    .end(html);
const redirect = (response: ServerResponse, location: string): void =>
  void response.writeHead(303, { Location: location }).end();

function answerPage(
  context: ApiContext,
  request: IncomingMessage,
  response: ServerResponse,
  url: URL,
  form: Form,
): void {
  const [, id = '', rest] = /^\/pay\/([^/]+)(\/authenticate)?$/.exec(url.pathname) ?? [];
  const session = context.store.state.sessions[id];
  if (!session) return sendPage(response, 404, notFoundPage());
  if (session.status !== 'open') return sendPage(response, 200, closedPage(session));
  const lines = context.store.state.lines[id] ?? [];
  if (request.method !== 'POST')
    return sendPage(response, 200, rest ? authenticatePage(session) : payPage(session, lines, null));
  const attempt = rest
    ? context.payments.authenticate(session, textOf(form, 'passed') === '1')
    : textOf(form, 'way') === 'debit'
      ? context.payments.payByDebit(session, textOf(form, 'succeeds') === '1')
      : context.payments.payWithCard(session, textOf(form, 'card') ?? '');
  if (attempt === 'paid' || attempt === 'processing')
    return redirect(response, (session.success_url ?? '/').replace('{CHECKOUT_SESSION_ID}', session.id));
  if (attempt === 'authenticate') return redirect(response, `/pay/${id}/authenticate`);
  sendPage(response, 402, payPage(session, lines, problemOf(context, session, attempt)));
}

function problemOf(context: ApiContext, session: FakeSession, attempt: Attempt): string {
  if (attempt === 'unknown_card') return 'That is not one of the sample cards listed below.';
  const { intents, setups } = context.store.state;
  const error =
    intents[session.payment_intent ?? '']?.last_payment_error ?? setups[session.setup_intent ?? '']?.last_setup_error;
  return `${error?.message ?? 'The card was declined.'} Nothing was charged. Try another card.`;
}

/** Controls answer JSON to programs and lead back to the control page in a browser. */
function answerControls(
  context: ApiContext,
  request: IncomingMessage,
  response: ServerResponse,
  url: URL,
  form: Form,
): void {
  const { store, webhooks, payments } = context;
  if (request.method !== 'POST') {
    if (url.pathname === '/_fake/state')
      return void response.writeHead(200, { 'Content-Type': 'application/json' }).end(JSON.stringify(store.state));
    return sendPage(
      response,
      url.pathname === '/_fake' ? 200 : 404,
      url.pathname === '/_fake' ? controlPage(store.state) : notFoundPage(),
    );
  }
  const number = (name: string) => Number(textOf(form, name) ?? 0);
  switch (url.pathname) {
    case '/_fake/switches':
      Object.assign(store.state.switches, calm, {
        duplicate: number('duplicate'),
        delayMs: number('delayMs'),
        reorder: number('reorder') === 1,
        lose: number('lose'),
        failNext: number('failNext'),
        hangNext: number('hangNext'),
        stallNext: number('stallNext'),
      });
      break;
    case '/_fake/clock':
      store.state.clockOffsetSeconds += number('advanceSeconds');
      payments.passTime();
      break;
    case '/_fake/redeliver':
      webhooks.redeliver(textOf(form, 'event') ?? '');
      break;
    case '/_fake/disputes':
      openDispute(store, webhooks, textOf(form, 'paymentIntent') ?? '', number('amount') || undefined);
      break;
    case '/_fake/disputes/decide':
      decideDispute(store, webhooks, textOf(form, 'dispute') ?? '', textOf(form, 'status') === 'won' ? 'won' : 'lost');
      break;
    default:
      return sendPage(response, 404, notFoundPage());
  }
  if ((request.headers.accept ?? '').includes('text/html')) return redirect(response, '/_fake');
  response.writeHead(200, { 'Content-Type': 'application/json' }).end(JSON.stringify({ done: true }));
}
