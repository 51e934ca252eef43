/** The mailbox over HTTP: pages for people, `/messages?to=` as JSON for tests. Read only. */
import { createServer, type Server, type ServerResponse } from 'node:http';
import type { Mailbox, Message } from './mailbox.ts';
import { listPage, messagePage, missingPage, styles } from './pages.ts';

const pagePolicy = "default-src 'none'; style-src 'self'; frame-src 'self'; form-action 'self'; base-uri 'none'";
/** A mail brings its own inline styles, as mails do, and nothing else. */
const mailPolicy =
  "default-src 'none'; style-src 'unsafe-inline'; img-src data:; sandbox allow-popups allow-popups-to-escape-sandbox";

function send(response: ServerResponse, status: number, type: string, body: string | Buffer, more = {}): void {
  response.writeHead(status, {
    'Content-Type': type,
    'Content-Security-Policy': pagePolicy,
    'X-Content-Type-Options': 'nosniff',
    'Referrer-Policy': 'no-referrer',
    'Cache-Control': 'no-store',
    ...more,
  });
  response.end(body);
}

const html = 'text/html; charset=utf-8';

const summary = ({ attachments, ...message }: Message) => ({
  ...message,
  attachments: attachments.map(({ filename, contentType, content }, index) => ({
    filename,
    contentType,
    bytes: content.length,
    path: `/messages/${message.id}/attachments/${index}`,
  })),
});

export function mailboxServer(mailbox: Mailbox): Server {
  return createServer((request, response) => {
    const url = new URL(request.url ?? '/', 'http://mailbox.local');
    const to = url.searchParams.get('to') ?? '';
    if (request.method !== 'GET' && request.method !== 'HEAD') return send(response, 405, 'text/plain', 'Read only.');
    if (url.pathname === '/') return send(response, 200, html, listPage(mailbox.list(to), to));
    if (url.pathname === '/styles.css') return send(response, 200, 'text/css; charset=utf-8', styles);
    if (url.pathname === '/messages')
      return send(response, 200, 'application/json', JSON.stringify({ messages: mailbox.list(to).map(summary) }));
    const [, id, part, index] = /^\/messages\/(\d+)(?:\/(html|attachments)(?:\/(\d+))?)?$/.exec(url.pathname) ?? [];
    const message = id === undefined ? undefined : mailbox.find(Number(id));
    if (!message) return send(response, 404, html, missingPage());
    if (part === undefined) return send(response, 200, html, messagePage(message));
    if (part === 'html' && index === undefined)
      return send(response, 200, html, withBase(message.html ?? ''), { 'Content-Security-Policy': mailPolicy });
    const attachment = message.attachments[Number(index ?? Number.NaN)];
    if (!attachment) return send(response, 404, html, missingPage());
    send(response, 200, attachment.contentType, attachment.content, {
      'Content-Disposition': `attachment; filename*=UTF-8''${encodeURIComponent(attachment.filename)}`,
    });
  });
}

/** Inside the frame, links open outside it. */
const withBase = (content: string): string => content.replace(/<head>/i, '<head><base target="_blank">');
