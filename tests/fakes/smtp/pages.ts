/** The mailbox as web pages: a list, one mail. Plain, readable, and plain about what it is. */
import type { Message } from './mailbox.ts';

const escapes: Record<string, string> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;', "'": '&#39;' };
export const escapeHtml = (text: string): string =>
  text.replaceAll(/[&<>"']/g, (character) => escapes[character] ?? '');

/** Served as a file of its own, so that the pages need no inline styles. */
export const styles = `
:root { color-scheme: light dark; --paper: #f2f6f8; --panel: #fcfdfe; --glass: #dce8ee; --rule: #cbd7de; --ink: #13212b; --soft: #4b5c69; --bromo: #1d5c9e; --methyl: #a34e00; }
@media (prefers-color-scheme: dark) { :root { --paper: #0d1418; --panel: #131d23; --glass: #1a262d; --rule: #2a3943; --ink: #e8f0f3; --soft: #9fb1bc; --bromo: #74b4f4; --methyl: #f0a35a; } }
* { box-sizing: border-box; }
body { margin: 0; background: var(--paper); color: var(--ink); font: 16px/1.5 Manrope, system-ui, sans-serif; }
header, main { max-width: 64rem; margin: 0 auto; padding: 1rem; }
h2 { font-size: 1.125rem; margin: 1.5rem 0 0.5rem; }
h1 { font-size: 1.5rem; line-height: 1.25; margin: 0.5rem 0; overflow-wrap: anywhere; }
p.local { color: var(--methyl); margin: 0; }
a { color: var(--bromo); }
:focus-visible { outline: 3px solid var(--bromo); outline-offset: 2px; }
form { display: flex; flex-wrap: wrap; gap: 0.5rem; align-items: end; margin: 1rem 0; }
label { display: block; font-size: 0.875rem; color: var(--soft); }
input, button { font: inherit; min-height: 2.5rem; padding: 0.25rem 0.75rem; border: 1px solid var(--soft); background: var(--panel); color: var(--ink); }
input { width: 18rem; max-width: 100%; }
ul.mails { list-style: none; padding: 0; margin: 0; border-top: 1px solid var(--rule); }
ul.mails li { padding: 0.75rem 0; border-bottom: 1px solid var(--rule); overflow-wrap: anywhere; }
ul.mails a { font-weight: 600; }
.about, dl { color: var(--soft); font-size: 0.875rem; font-variant-numeric: tabular-nums; }
dl { display: grid; grid-template-columns: max-content 1fr; gap: 0.25rem 1rem; }
dd { margin: 0; overflow-wrap: anywhere; }
iframe { width: 100%; height: 36rem; border: 1px solid var(--rule); background: #ffffff; }
pre { white-space: pre-wrap; overflow-wrap: anywhere; padding: 1rem; background: var(--panel); border: 1px solid var(--rule); font: inherit; }
`;

function page(title: string, body: string): string {
  return `<!doctype html>
<html lang="en">
<head><meta charset="utf-8"><meta name="viewport" content="width=device-width, initial-scale=1"><title>${escapeHtml(title)}</title><link rel="stylesheet" href="/styles.css"></head>
<body>
<header><p class="local">Local mailbox for development: nothing leaves this machine.</p></header>
<main>
${body}
</main>
</body>
</html>
`;
}

const time = (at: string): string => `<time datetime="${at}">${at.slice(0, 19).replace('T', ' ')} UTC</time>`;

export function listPage(messages: Message[], to: string): string {
  const items = messages.map(
    ({ id, subject, to: recipients, receivedAt, attachments }) =>
      `<li><a href="/messages/${id}">${escapeHtml(subject)}</a><div class="about">to ${escapeHtml(recipients.join(', '))} · ${time(receivedAt)}${attachments.length > 0 ? ` · ${attachments.length} attached` : ''}</div></li>`,
  );
  const empty = to === '' ? 'No mail has arrived yet.' : `No mail has arrived for ${escapeHtml(to)}.`;
  return page(
    'Mailbox',
    `<h1>Mailbox</h1>
<form method="get" action="/"><div><label for="to">To</label><input id="to" name="to" type="email" value="${escapeHtml(to)}" autocomplete="off"></div><button type="submit">Show</button></form>
${items.length > 0 ? `<ul class="mails">${items.join('\n')}</ul>` : `<p>${empty}</p>`}`,
  );
}

export function messagePage(message: Message): string {
  const { id, subject, from, to, receivedAt, messageId, text, html, attachments } = message;
  const attached = attachments.map(
    ({ filename, content }, index) =>
      `<li><a href="/messages/${id}/attachments/${index}" download>${escapeHtml(filename)}</a> <span class="about">${content.length.toLocaleString('en')} bytes</span></li>`,
  );
  // Links are followed in a window of their own; nothing in a mail may run or reach this page.
  const frame = html
    ? `<h2>As the reader sees it</h2><iframe title="${escapeHtml(subject)}" sandbox="allow-popups allow-popups-to-escape-sandbox" src="/messages/${id}/html"></iframe>`
    : '';
  return page(
    subject,
    `<p><a href="/">All mail</a></p>
<h1>${escapeHtml(subject)}</h1>
<dl><dt>From</dt><dd>${escapeHtml(from)}</dd><dt>To</dt><dd>${escapeHtml(to.join(', '))}</dd><dt>Received</dt><dd>${time(receivedAt)}</dd><dt>Message-ID</dt><dd>${escapeHtml(messageId)}</dd></dl>
${attached.length > 0 ? `<h2>Attached</h2><ul>${attached.join('')}</ul>` : ''}
${frame}
<h2>As text</h2>
<pre>${linked(text)}</pre>`,
  );
}

/** Makes the addresses in a plain text clickable. */
const linked = (text: string): string =>
  text
    .split(/(https?:\/\/[^\s<>"']+)/)
    .map((part, index) =>
      index % 2 === 1 ? `<a href="${escapeHtml(part)}" rel="noreferrer">${escapeHtml(part)}</a>` : escapeHtml(part),
    )
    .join('');

export const missingPage = (): string => page('Not here', '<h1>Not here</h1><p><a href="/">All mail</a></p>');
