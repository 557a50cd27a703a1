import type { DemoMailListAnswer } from '../contract/alerts.js';
import type { KeptMail } from '../smtp-fake/read-mailbox.js';

/** A line of the demo's mailbox as the contract has it. */
export function presentDemoMail(mail: KeptMail): DemoMailListAnswer['data'][number] {
  return { id: mail.id, subject: mail.subject, to: mail.to, at: mail.at?.toISOString() ?? null };
}
