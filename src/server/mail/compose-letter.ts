/** Turns paragraphs and one action into the text and the HTML of a mail: quiet, readable without images or styles. */

export interface Letter {
  subject: string;
  /** Plain sentences; escaped for HTML. */
  paragraphs: string[];
  /** The one thing to do, if any. */
  action?: { label: string; url: string };
  /** Small print below the action. */
  closing?: string[];
}

export interface ComposedLetter {
  subject: string;
  text: string;
  html: string;
}

const escapes: Record<string, string> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;', "'": '&#39;' };
const escape = (text: string): string => text.replaceAll(/[&<>"']/g, (character) => escapes[character] ?? '');

export function composeLetter(letter: Letter): ComposedLetter {
  const { subject, paragraphs, action, closing = [] } = letter;
  const text = [
    ...paragraphs,
    ...(action ? [`${action.label}:\n${action.url}`] : []),
    ...closing,
    'Burette: metered stochastic simulation',
  ].join('\n\n');
  const paragraph = (content: string, style: string) => `<p style="margin:0 0 16px;${style}">${content}</p>`;
  const html = `<!doctype html>
<html lang="en">
<head><meta charset="utf-8"><meta name="viewport" content="width=device-width"><title>${escape(subject)}</title></head>
<body style="margin:0;padding:24px;background:#F2F6F8;color:#13212B;font-family:Manrope,Helvetica,Arial,sans-serif;font-size:16px;line-height:1.5">
<div style="max-width:560px;margin:0 auto;padding:24px;background:#FCFDFE;border-top:3px solid #B8105A">
${paragraphs.map((content) => paragraph(escape(content), '')).join('\n')}
${
  action
    ? `${paragraph(`<a href="${escape(action.url)}" style="display:inline-block;padding:10px 18px;background:#B8105A;color:#FFFFFF;text-decoration:none">${escape(action.label)}</a>`, '')}
${paragraph(`If the button does not work: <a href="${escape(action.url)}" style="color:#1D5C9E;word-break:break-all">${escape(action.url)}</a>`, 'font-size:14px;color:#4B5C69')}`
    : ''
}
${closing.map((content) => paragraph(escape(content), 'font-size:14px;color:#4B5C69')).join('\n')}
<p style="margin:24px 0 0;padding-top:12px;border-top:1px solid #CBD7DE;font-size:13px;color:#4B5C69">Burette: metered stochastic simulation</p>
</div>
</body>
</html>
`;
  return { subject, text: `${text}\n`, html };
}
