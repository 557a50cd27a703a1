import type { MailView } from '../contract/alerts.js';
import type { MailAttempt } from '../models/mail-attempt.js';
import type { OutboxMail } from '../models/outbox-mail.js';

/** A mail of the outbox with its tries in order. */
export interface MailRecord {
  mail: OutboxMail;
  watchName: string;
  attempts: MailAttempt[];
}

/** A mail as the contract has it; the next try only while one is to come. */
export function presentMail({ mail, watchName, attempts }: MailRecord): MailView {
  return {
    id: mail.id,
    messageId: mail.messageId,
    to: mail.address,
    watch: { id: mail.watchId, name: watchName },
    state: mail.state,
    mayHaveGoneTwice: mail.mayHaveGoneTwice,
    reason: mail.reason,
    createdAt: mail.createdAt.toISOString(),
    nextTryAt: mail.state === 'pending' ? mail.nextTryAt.toISOString() : null,
    sentAt: mail.sentAt?.toISOString() ?? null,
    attempts: attempts.map((attempt) => ({
      number: attempt.number,
      startedAt: attempt.startedAt.toISOString(),
      finishedAt: attempt.finishedAt?.toISOString() ?? null,
      outcome: attempt.outcome,
      detail: attempt.detail,
    })),
  };
}
