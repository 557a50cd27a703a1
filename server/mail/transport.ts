import { createTransport, type Transporter } from 'nodemailer';
import type { WrittenMail } from './alert-mail.js';
import { oneLine } from './words.js';

/** A mail ready to be handed over; the Message-ID was fixed when it was first intended. */
export interface OutgoingMail extends WrittenMail {
  messageId: string;
  from: string;
  to: { name: string; address: string };
}

/**
 * What the mail server made of it. `refused`: it was certainly not taken; `permanent`: it never
 * will be. `unclear`: the line was lost before the answer, so it may have gone.
 */
export type Delivery =
  | { outcome: 'accepted'; detail: string }
  | { outcome: 'refused'; permanent: boolean; detail: string }
  | { outcome: 'unclear'; detail: string };

/** Hands a mail over; never throws. */
export type Transport = (mail: OutgoingMail) => Promise<Delivery>;

/** The most that one hand-over may take without a word from the other side, by step. */
const TIMEOUTS = { connectionTimeout: 10_000, greetingTimeout: 10_000, socketTimeout: 30_000 };

/** Failures that nodemailer names and that come before the mail itself is sent. */
const BEFORE_THE_MAIL = new Set(['EDNS', 'ETLS', 'EAUTH', 'EENVELOPE', 'ECONFIG']);
const TIMEOUTS_BEFORE_THE_MAIL = new Set([
  'CONNECT_TIMEOUT',
  'GREETING_TIMEOUT',
  'UPGRADE_TIMEOUT',
]);

/** Commands that a mail server answers with this mail in view; any other is about the line. */
const ABOUT_THE_MAIL = new Set(['MAIL FROM', 'RCPT TO', 'DATA']);

/** A transport to an `smtp://` or `smtps://` address; a new line for each mail. */
export function openTransport(smtpUrl: string, timeouts: Partial<typeof TIMEOUTS> = {}): Transport {
  const address = new URL(smtpUrl);
  const secure = address.protocol === 'smtps:';
  const transporter = createTransport({
    host: address.hostname,
    port: Number(address.port) || (secure ? 465 : 587),
    secure,
    ...(address.username
      ? {
          auth: {
            user: decodeURIComponent(address.username),
            pass: decodeURIComponent(address.password),
          },
        }
      : {}),
    ...TIMEOUTS,
    ...timeouts,
    disableFileAccess: true,
    disableUrlAccess: true,
  });
  return (mail) => handOver(transporter, mail);
}

async function handOver(transporter: Transporter, mail: OutgoingMail): Promise<Delivery> {
  try {
    const info = (await transporter.sendMail({
      ...mail,
      subject: oneLine(mail.subject),
      to: { name: oneLine(mail.to.name), address: mail.to.address },
      headers: { 'Auto-Submitted': 'auto-generated' },
    })) as { response: string };
    return { outcome: 'accepted', detail: oneLine(info.response) };
  } catch (error) {
    return whyNot(error);
  }
}

function whyNot(error: unknown): Delivery {
  const {
    code = '',
    command = '',
    responseCode,
    syscall,
    timeoutType = '',
    message,
  } = error as {
    code?: string;
    command?: string;
    responseCode?: number;
    syscall?: string;
    timeoutType?: string;
    message?: string;
  };
  const detail = oneLine(message ?? String(error));
  // A server that is shut, or a password that is wrong, will be mended; the mail is not at fault.
  const permanent = (responseCode ?? 0) >= 500 && ABOUT_THE_MAIL.has(command);
  if (responseCode) return { outcome: 'refused', permanent, detail };
  if (
    syscall === 'connect' ||
    BEFORE_THE_MAIL.has(code) ||
    TIMEOUTS_BEFORE_THE_MAIL.has(timeoutType)
  ) {
    return { outcome: 'refused', permanent: false, detail };
  }
  return { outcome: 'unclear', detail };
}

/** The address mail comes from, at the host where people reach the portal. */
export function senderAt(publicUrl: string): string {
  const { hostname } = new URL(publicUrl);
  const isName = /^[a-z0-9-]+(\.[a-z0-9-]+)*$/i.test(hostname) && !/^[0-9.]+$/.test(hostname);
  return `Fishplate <fishplate@${isName ? hostname : 'localhost'}>`;
}

/** A Message-ID of RFC 5322 from a UUID and the host of the portal. */
export function messageIdAt(publicUrl: string, uuid: string): string {
  return `<${uuid}@${new URL(publicUrl).hostname.replace(/[[\]:]/g, '')}>`;
}
