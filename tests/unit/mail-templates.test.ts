import { describe, expect, test } from 'vitest';
import { writeAlertMail, type AlertMailData } from '../../server/mail/alert-mail.js';
import { messageIdAt, senderAt } from '../../server/mail/transport.js';
import { clockTime, countOf, escapeHtml, howLong, oneLine } from '../../server/mail/words.js';

const line = {
  unitId: 'QTKX40127',
  display: 'QTKX 40127',
  kind: 'car',
  siteName: 'Alder Bend Yard',
  basis: 'read',
  since: new Date('2026-03-04T15:00:00.000Z'),
  atLeast: false,
};
const quiet: AlertMailData = {
  publicUrl: 'https://portal.example',
  timeZone: 'America/Chicago',
  now: new Date('2026-03-08T16:00:00.000Z'),
  raisedAt: new Date('2026-03-08T15:59:50.000Z'),
  watch: { name: 'My tank cars', kind: 'quiet', hours: 72 },
  total: 1,
  lines: [line],
};
const dwell: AlertMailData = {
  ...quiet,
  watch: { name: 'Long standing', kind: 'dwell', hours: 48 },
};

describe('a mail about one car', () => {
  test('says in its subject which car and for how long', () => {
    expect(writeAlertMail(quiet).subject).toBe('QTKX 40127: quiet 4 d');
    expect(writeAlertMail(dwell).subject).toBe(
      'QTKX 40127: past its limit, 4 d at Alder Bend Yard',
    );
  });

  test('tells times on the clock of the recipient, summer and winter', () => {
    const { text } = writeAlertMail(quiet);
    expect(text).toContain('Last read at Alder Bend Yard, Wed 4 Mar 2026 09:00 CST');
    // The eighth of March 2026 is the day on which Chicago changes to summer time.
    expect(text).toContain(
      'Times on the clock of America/Chicago. As of Sun 8 Mar 2026 11:00 CDT.',
    );
  });

  test('does not call read what was only reported or seen by eye', () => {
    const textOf = (basis: string) =>
      writeAlertMail({ ...quiet, lines: [{ ...line, basis }] }).text;
    expect(textOf('report')).toContain('Last reported at Alder Bend Yard, Wed 4 Mar 2026');
    expect(textOf('hand')).toContain('Last seen by eye at Alder Bend Yard, Wed 4 Mar 2026');
  });

  test('links the car and the list of alerts in both parts', () => {
    const { text, html } = writeAlertMail(quiet);
    expect(text).toContain('\n  https://portal.example/equipment/QTKX40127\n');
    expect(html).toContain('<a href="https://portal.example/equipment/QTKX40127">QTKX 40127</a>');
    expect(text).toContain('https://portal.example/alerts');
    expect(html).toContain('<a href="https://portal.example/alerts">');
  });

  test('says why it came and that it authorises nothing', () => {
    const { text, html } = writeAlertMail(dwell);
    expect(text).toContain('because of the watch “Long standing”: standing over 48 h.');
    for (const part of [text, html]) expect(part).toContain('Nothing here authorises a movement');
  });

  test('says at least where the arrival is not known', () => {
    const { subject, text } = writeAlertMail({ ...dwell, lines: [{ ...line, atLeast: true }] });
    expect(subject).toContain('past its limit, at least 4 d');
    expect(text).toContain('At Alder Bend Yard since before Wed 4 Mar 2026 09:00 CST');
  });

  test('says how late it is when it is late, and only then', () => {
    expect(writeAlertMail(quiet).text).not.toContain('late:');
    const late = { ...quiet, raisedAt: new Date('2026-03-08T13:00:00.000Z') };
    expect(writeAlertMail(late).text).toContain(
      'This mail is 3 h late: the watch noticed on Sun 8 Mar 2026 08:00 CDT.',
    );
  });
});

describe('a mail about several cars', () => {
  const box = { ...line, unitId: 'ZQXU3054381', display: 'ZQXU 305438 1', kind: 'container' };

  test('counts them by what they are', () => {
    expect(writeAlertMail({ ...quiet, total: 2, lines: [line, line] }).subject).toBe(
      '2 cars quiet (My tank cars)',
    );
    expect(writeAlertMail({ ...dwell, total: 2, lines: [line, box] }).subject).toBe(
      '2 cars and boxes past their limit (Long standing)',
    );
  });

  test('says how many it leaves out', () => {
    expect(writeAlertMail({ ...quiet, total: 90, lines: [line, line] }).text).toContain(
      'and 88 more, on the list of alerts.',
    );
  });
});

describe('words from people', () => {
  const name = 'Cars\r\nBcc: everyone@elsewhere.example\u2028<script>"&';
  const nasty = { ...quiet, total: 2, lines: [line, line], watch: { ...quiet.watch, name } };

  test('never end a line of the subject', () => {
    expect(writeAlertMail(nasty).subject).toBe(
      '2 cars quiet (Cars Bcc: everyone@elsewhere.example <script>"&)',
    );
  });

  test('never become HTML', () => {
    const { html } = writeAlertMail(nasty);
    expect(html).not.toContain('<script>');
    expect(html).toContain('&lt;script&gt;&quot;&amp;');
  });
});

test('durations are rounded down and change to days at three', () => {
  expect(howLong(59 * 60_000)).toBe('59 min');
  expect(howLong(71.9 * 3_600_000)).toBe('71 h');
  expect(howLong(72 * 3_600_000)).toBe('3 d');
  expect(howLong(-5)).toBe('0 min');
});

test('the repeated hour of autumn says which one it is', () => {
  const inZone = (instant: string) => clockTime(new Date(instant), 'America/Chicago');
  expect(inZone('2026-11-01T06:30:00.000Z')).toBe('Sun 1 Nov 2026 01:30 CDT');
  expect(inZone('2026-11-01T07:30:00.000Z')).toBe('Sun 1 Nov 2026 01:30 CST');
});

test('midnight is 00, not 24', () => {
  expect(clockTime(new Date('2026-03-04T00:05:00.000Z'), 'UTC')).toBe('Wed 4 Mar 2026 00:05 UTC');
});

test('counts use the words of the floor', () => {
  expect(countOf(1, ['container'])).toBe('1 box');
  expect(countOf(3, ['container'])).toBe('3 boxes');
  expect(countOf(2, ['locomotive'])).toBe('2 locomotives');
  expect(countOf(2, ['car', 'locomotive'])).toBe('2 pieces of equipment');
});

test('lines are made of one line and HTML of text', () => {
  expect(oneLine(' a\t\r\n b\u0000c ')).toBe('a b c');
  expect(escapeHtml(`<a href='x'>"&"</a>`)).toBe(
    '&lt;a href=&#39;x&#39;&gt;&quot;&amp;&quot;&lt;/a&gt;',
  );
});

test('sender and Message-ID stand at the host of the portal', () => {
  expect(senderAt('https://portal.example:8443')).toBe('Fishplate <fishplate@portal.example>');
  expect(senderAt('http://127.0.0.1:4300')).toBe('Fishplate <fishplate@localhost>');
  expect(messageIdAt('http://127.0.0.1:4300', 'an-id')).toBe('<an-id@127.0.0.1>');
});
