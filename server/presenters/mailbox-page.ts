import { clockTime, escapeHtml } from '../mail/words.js';
import type { KeptMail } from '../smtp-fake/read-mailbox.js';

/** The demo's mailbox as a page: plain HTML, no script, its style from a file of its own. */
export function mailboxPage(mails: KeptMail[]): string {
  const rows = mails.map(
    (mail) => `<tr>
<td class="time">${timeOf(mail)}</td>
<td>${escapeHtml(mail.to)}</td>
<td><a href="/demo/mailbox/${mail.id}">${escapeHtml(mail.subject)}</a></td>
</tr>`,
  );
  const table = `<table>
<thead><tr><th scope="col">Sent, UTC</th><th scope="col">To</th><th scope="col">Subject</th></tr></thead>
<tbody>${rows.join('\n')}</tbody>
</table>`;
  return page(
    'Mailbox of the demo',
    `<h1>${countOfMails(mails.length)}</h1>
<p>No mail leaves the demo: what it sends, to whomever, ends here. Newest first.</p>
${mails.length === 0 ? '<p>Set a watch, and its first mail comes here.</p>' : table}`,
  );
}

/** One mail: its text as it was sent, web addresses as links. */
export function mailPage(mail: KeptMail): string {
  return page(
    mail.subject,
    `<p><a href="/demo/mailbox">All mail</a></p>
<h1>${escapeHtml(mail.subject)}</h1>
<dl>
<dt>From</dt><dd>${escapeHtml(mail.from)}</dd>
<dt>To</dt><dd>${escapeHtml(mail.to)}</dd>
<dt>Sent, UTC</dt><dd class="time">${timeOf(mail)}</dd>
<dt>Message-ID</dt><dd class="time">${escapeHtml(mail.messageId)}</dd>
</dl>
<pre>${linked(mail.text)}</pre>`,
  );
}

/** Style of both pages. */
export const mailboxStyle = `:root { color-scheme: light dark; --paper: #f4f1ea; --ink: #221e1a; --rule: #8a7f6e; --link: #1f6b62; }
@media (prefers-color-scheme: dark) {
  :root { --paper: #161412; --ink: #e6dfd3; --rule: #857b6f; --link: #6fc3b6; }
}
body { margin: 0; background: var(--paper); color: var(--ink); font: 15px/24px 'IBM Plex Sans', system-ui, sans-serif; }
main { max-width: 64rem; padding: 20px 24px 52px; }
h1 { font-size: 27px; line-height: 37px; font-weight: 500; overflow-wrap: anywhere; }
a { color: var(--link); }
a:focus-visible { outline: 2px solid var(--link); outline-offset: 2px; }
table { width: 100%; border-collapse: collapse; font-size: 14px; line-height: 20px; }
th, td { padding: 6px 12px 5px 0; border-bottom: 1px solid var(--rule); text-align: left; vertical-align: top; overflow-wrap: anywhere; }
dl { display: grid; grid-template-columns: max-content 1fr; gap: 4px 20px; }
dt { font-weight: 500; }
dd { margin: 0; overflow-wrap: anywhere; }
pre, .time { font-family: 'IBM Plex Mono', ui-monospace, monospace; font-size: 14px; }
pre { border-top: 1px solid var(--rule); padding-top: 12px; white-space: pre-wrap; overflow-wrap: anywhere; }
`;

function countOfMails(count: number): string {
  if (count === 0) return 'No mail yet';
  return count === 1 ? '1 mail caught' : `${count} mails caught`;
}

function page(title: string, body: string): string {
  return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>${escapeHtml(title)}</title>
<link rel="stylesheet" href="/demo/mailbox.css">
</head>
<body>
<main>
${body}
</main>
</body>
</html>
`;
}

function timeOf({ at }: KeptMail): string {
  return at ? clockTime(at, 'UTC') : '';
}

/** Escapes a text and makes its http addresses links. */
function linked(text: string): string {
  return text
    .split(/(https?:\/\/[^\s<>"]+)/)
    .map((part, index) => {
      const shown = escapeHtml(part);
      return index % 2 === 1 ? `<a href="${shown}">${shown}</a>` : shown;
    })
    .join('');
}
