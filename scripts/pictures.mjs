import { mkdirSync } from 'node:fs';
import path from 'node:path';
import { parseArgs } from 'node:util';
import { chromium } from 'playwright-core';
import { findBrowser } from './lib/programs.mjs';
import { readSettings } from './lib/settings.mjs';
import { emptyAnswers, screens, sizes } from './lib/picture-list.mjs';

/*
 * Pictures of every screen of a demo that runs, into the data directory:
 *   npm run pictures -- [--address http://127.0.0.1:4300] [--only fleet]
 * The empty ones are the same client with answers that hold nothing.
 */
const settings = readSettings();
const { values: options } = parseArgs({
  options: {
    address: { type: 'string', default: `http://127.0.0.1:${settings.port}` },
    only: { type: 'string', default: '' },
  },
});
const directory = path.join(settings.dataDir, 'pictures');
mkdirSync(directory, { recursive: true });
const browser = await chromium.launch({
  executablePath: findBrowser(),
  args: process.getuid?.() === 0 ? ['--no-sandbox'] : [],
});
try {
  const sessions = new Map();
  for (const data of ['demo', 'empty']) {
    for (const screen of screens.filter(({ name }) => name.includes(options.only))) {
      if (data === 'empty' && !screen.hasEmpty) continue;
      const state = await sessionOf(screen.email, sessions);
      for (const size of sizes) await takeBoth(screen, data, size, state);
    }
  }
} finally {
  await browser.close();
}

/** Signs a person in once and keeps the cookie for all their pictures. */
async function sessionOf(email, known) {
  if (!email) return undefined;
  if (!known.has(email)) {
    const context = await browser.newContext();
    const answer = await context.request.post(`${options.address}/api/session`, {
      data: { email, password: 'fishplate-demo' },
      headers: { origin: options.address },
    });
    if (!answer.ok()) throw new Error(`${email} could not sign in: ${answer.status()}`);
    known.set(email, await context.storageState());
    await context.close();
  }
  return known.get(email);
}

async function takeBoth(screen, data, { width, height }, storageState) {
  for (const colorScheme of ['light', 'dark']) {
    const context = await browser.newContext({
      ...(storageState && { storageState }),
      viewport: { width, height },
      colorScheme,
      hasTouch: width < 500,
      reducedMotion: 'reduce',
    });
    const page = await context.newPage();
    page.on('pageerror', (error) => console.error(`${screen.name}: ${error.stack}`));
    page.on('console', (line) => {
      if (line.type() === 'error') console.error(`${screen.name}: ${line.text()}`);
    });
    if (data === 'empty') await answerNothing(page);
    await page.goto(options.address + screen.path);
    await page.getByRole('heading', { level: 1 }).first().waitFor();
    await page.waitForLoadState('networkidle', { timeout: 4000 }).catch(() => undefined);
    await screen.act?.(page);
    for (const waiting of await page.getByText(/^(Fetching|Reckoning)/).all()) {
      await waiting.waitFor({ state: 'detached' });
    }
    const file = `${screen.name}-${data}-${width}-${colorScheme}.png`;
    await page.screenshot({ path: path.join(directory, file), fullPage: screen.isWhole ?? false });
    console.log(file);
    await context.close();
  }
}

async function answerNothing(page) {
  for (const [pattern, body] of emptyAnswers) {
    await page.route(pattern, (route) => route.fulfill({ json: body }));
  }
}
