import { readdir, readFile } from 'node:fs/promises';
import path from 'node:path';
import { simpleParser, type AddressObject } from 'mailparser';

const MOST_LISTED = 200;
const NAME = /^\d{13}-[0-9a-f]{12}$/;

/** A mail that the fake kept; `id` is its file name without `.eml`. */
export interface KeptMail {
  id: string;
  messageId: string;
  from: string;
  to: string;
  subject: string;
  at: Date | null;
  text: string;
  html: string;
  /** Header lines as they came, name in lower case. */
  headers: { name: string; line: string }[];
}

/** The newest 200 mails of a directory, newest first; none when it is not there yet. */
export async function readMailbox(directory: string): Promise<KeptMail[]> {
  const names = await fileNames(directory);
  const ids = names
    .filter((name) => name.endsWith('.eml'))
    .map((name) => name.slice(0, -'.eml'.length))
    .filter((id) => NAME.test(id))
    .sort()
    .reverse()
    .slice(0, MOST_LISTED);
  return Promise.all(ids.map((id) => parse(directory, id)));
}

/** One mail; null when there is none of that id. */
export async function readKeptMail(directory: string, id: string): Promise<KeptMail | null> {
  if (!NAME.test(id)) return null;
  const names = await fileNames(directory);
  return names.includes(`${id}.eml`) ? parse(directory, id) : null;
}

async function fileNames(directory: string): Promise<string[]> {
  try {
    return await readdir(directory);
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return [];
    throw error;
  }
}

async function parse(directory: string, id: string): Promise<KeptMail> {
  const mail = await simpleParser(await readFile(path.join(directory, `${id}.eml`)));
  return {
    id,
    messageId: mail.messageId ?? '',
    from: textOf(mail.from),
    to: textOf(mail.to),
    subject: mail.subject ?? '',
    at: mail.date ?? null,
    text: mail.text ?? '',
    html: mail.html || '',
    headers: mail.headerLines.map(({ key, line }) => ({ name: key, line })),
  };
}

function textOf(address: AddressObject | AddressObject[] | undefined): string {
  return [address ?? []]
    .flat()
    .map((one) => one.text)
    .join(', ');
}
