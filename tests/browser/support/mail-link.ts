import type { KeptMail } from '../../../server/smtp-fake/read-mailbox.js';

/** The one link in a mail whose path starts with `path`; throws unless text and HTML have the same. */
export function linkIn(mail: KeptMail | undefined, path: string): string {
  const isWanted = (link: string) => new URL(link).pathname.startsWith(path);
  const inText = (mail?.text.match(/https?:\/\/\S+/g) ?? []).filter(isWanted);
  const inHtml = [...(mail?.html.matchAll(/href="([^"]+)"/g) ?? [])]
    .map(([, link]) => link ?? '')
    .filter(isWanted);
  const [link] = inText;
  if (!link || inText.length > 1 || inHtml.join() !== inText.join()) {
    throw new Error(`Links to ${path}: in the text ${inText.join()}, in the HTML ${inHtml.join()}`);
  }
  return link;
}
