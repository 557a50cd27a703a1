import type { Context } from '../lib/context.js';
import { writeAlertMail } from '../mail/alert-mail.js';
import { openTransport, senderAt, type OutgoingMail, type Transport } from '../mail/transport.js';
import type { Actor } from '../policies/actor.js';
import { findDueMail } from '../queries/find-due-mail.js';
import { listActors } from '../queries/list-actors.js';
import { listLiveWatches } from '../queries/list-live-watches.js';
import { loadNotice, type Notice } from '../queries/load-notice.js';
import { claimMail, type ClaimedMail } from '../services/claim-mail.js';
import { declineMail, postponeMail } from '../services/put-back-mail.js';
import { settleAttempt } from '../services/settle-attempt.js';
import { startAttempt } from '../services/start-attempt.js';

/** Mails that one run takes up at most; the next run is never far. */
const MOST_AT_ONCE = 50;
const WAIT_FOR_FINAL_MS = 10 * 60_000;

export interface SentOutbox {
  accepted: number;
  declined: number;
  /** Refused or unclear: tried again later, or given up. */
  troubled: number;
}

/**
 * Sends the mails that are due, one after the other. Without a mail server they wait. Two of
 * these at once share the work: each mail is claimed first.
 */
export async function sendOutbox(context: Context, transport?: Transport): Promise<SentOutbox> {
  const { db, env, clock } = context;
  const sum = { accepted: 0, declined: 0, troubled: 0 };
  const handOver = transport ?? (env.smtpUrl ? openTransport(env.smtpUrl) : null);
  if (!handOver) return sum;
  for (const id of await findDueMail(db, clock.now(), MOST_AT_ONCE)) {
    const mail = await claimMail(db, id, clock.now());
    const result = mail && (await sendClaimed(context, handOver, mail));
    if (result) sum[result] += 1;
  }
  return sum;
}

async function sendClaimed(
  context: Context,
  handOver: Transport,
  mail: ClaimedMail,
): Promise<keyof SentOutbox | null> {
  const { db, clock } = context;
  const decision = await decide(context, mail);
  if (decision.act === 'wait') {
    await postponeMail(db, mail, new Date(clock.now().getTime() + WAIT_FOR_FINAL_MS));
    return null;
  }
  if (decision.act === 'decline') {
    await declineMail(db, mail, decision.reason);
    return 'declined';
  }
  const attempt = await startAttempt(db, mail, clock.now());
  if (!attempt) return null;
  const delivery = await handOver(decision.mail);
  await settleAttempt(db, mail, attempt, delivery, clock.now());
  return delivery.outcome === 'accepted' ? 'accepted' : 'troubled';
}

type Decision =
  { act: 'send'; mail: OutgoingMail } | { act: 'decline'; reason: string } | { act: 'wait' };

const decline = (reason: string): Decision => ({ act: 'decline', reason });

/** Reads again what the mail is about and who is to get it, and writes it as it is true now. */
async function decide(context: Context, mail: ClaimedMail): Promise<Decision> {
  const { db, clock } = context;
  const now = clock.now();
  const [watch] = await listLiveWatches(db, mail.watchId);
  if (!watch) return decline('The watch has ended.');
  const people = await listActors(db, [watch.personId, mail.personId ?? watch.personId]);
  const owner = people.get(watch.personId);
  // A bare address sees what the person sees who named it.
  const recipient = mail.personId === null ? owner : people.get(mail.personId);
  if (!owner || !recipient) return decline('There is nobody left to tell.');
  const notice = await loadNotice(db, { ...mail, now }, owner, recipient);
  if (!notice) return decline('The watch has ended.');
  if (notice.total > 0) return { act: 'send', mail: write(context, mail, notice, recipient, now) };
  return notice.waiting > 0 ? { act: 'wait' } : decline(whyDeclined(notice));
}

function write(
  { env }: Context,
  mail: ClaimedMail,
  notice: Notice,
  recipient: Actor,
  now: Date,
): OutgoingMail {
  const written = writeAlertMail({
    publicUrl: env.publicUrl,
    timeZone: recipient.timeZone,
    now,
    raisedAt: notice.raisedAt,
    watch: notice.watch,
    total: notice.total,
    lines: notice.lines.map(({ name, ...line }) => ({ ...line, ...name })),
  });
  return {
    ...written,
    messageId: mail.messageId,
    from: senderAt(env.publicUrl),
    to: addressee(mail, recipient),
  };
}

function addressee(mail: ClaimedMail, recipient: Actor): OutgoingMail['to'] {
  return mail.personId === null
    ? { name: '', address: mail.address }
    : { name: recipient.name, address: recipient.email };
}

function whyDeclined({ outOfSight, acknowledged, cleared }: Notice): string {
  if (outOfSight > 0) return 'The recipient may no longer see what it is about.';
  if (cleared > 0) return 'It cleared before the mail went.';
  return acknowledged > 0
    ? 'It was acknowledged before the mail went.'
    : 'Nothing is left to tell.';
}
