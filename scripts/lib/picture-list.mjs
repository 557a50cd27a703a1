/** Window sizes of the pictures: desk, tablet, phone. */
export const sizes = [
  { width: 1440, height: 900 },
  { width: 768, height: 1024 },
  { width: 360, height: 780 },
];

const owner = 'owner@fishplate.example';
const dispatcher = 'dispatcher@fishplate.example';
const admin = 'admin@fishplate.example';

/** Opens the page of the first car in the list. */
async function openFirstCar(page) {
  await page.locator('[data-row-link]').first().click();
  await page.waitForURL('**/equipment/**');
  await page.getByRole('heading', { name: 'Raw reads' }).waitFor();
  await page.locator('#journey').waitFor();
  await page.waitForLoadState('networkidle', { timeout: 3000 }).catch(() => undefined);
}

async function askToBeTold(page) {
  await page.getByRole('button', { name: /^Tell me when/ }).click();
  await page.getByText(/^It covers/).waitFor();
}

async function lookUp(page) {
  await page.getByRole('combobox', { name: /Look up/ }).fill('4012');
  await page.getByRole('option').first().waitFor();
}

async function askToRelease(page) {
  await page
    .getByRole('button', { name: /^Release/ })
    .first()
    .click();
  await page.getByText('can not be taken back').waitFor();
}

async function reportWhatISaw(page) {
  await openFirstCar(page);
  await page.getByRole('button', { name: 'Report what I saw' }).click();
  await page.getByRole('button', { name: 'Report it as of now' }).waitFor();
}

/** Every screen: who sees it, where, and what is done before the picture. */
export const screens = [
  { name: 'sign-in', path: '/sign-in' },
  { name: 'fleet', path: '/fleet', email: owner, hasEmpty: true },
  { name: 'fleet-past-limit', path: '/fleet?pastLimit=true', email: owner },
  { name: 'fleet-boxes', path: '/fleet', email: 'boxes@fishplate.example' },
  { name: 'fleet-dispatcher', path: '/fleet?site=ALDER', email: dispatcher },
  { name: 'fleet-clerk', path: '/fleet', email: 'clerk@fishplate.example' },
  { name: 'fleet-administrator', path: '/fleet', email: admin },
  { name: 'fleet-nothing-left', path: '/fleet?search=QQQ', email: owner },
  { name: 'unit', path: '/fleet', email: owner, act: openFirstCar, isWhole: true },
  {
    name: 'unit-seen-by-eye',
    path: '/fleet',
    email: 'clerk@fishplate.example',
    act: reportWhatISaw,
  },
  { name: 'unit-unknown', path: '/equipment/QZZZ1', email: owner },
  { name: 'alerts', path: '/alerts', email: owner, hasEmpty: true },
  { name: 'alerts-cleared', path: '/alerts?state=cleared', email: owner },
  { name: 'watches', path: '/watches', email: owner, hasEmpty: true },
  { name: 'watch-quiet', path: '/fleet', email: owner, act: askToBeTold },
  { name: 'watch-standing', path: '/fleet?site=ALDER', email: dispatcher, act: askToBeTold },
  { name: 'rework', path: '/rework', email: admin, hasEmpty: true },
  { name: 'doubts', path: '/doubts', email: admin, hasEmpty: true },
  { name: 'set-aside', path: '/set-aside', email: admin, hasEmpty: true, isWhole: true },
  { name: 'set-aside-tags', path: '/set-aside?code=unmapped-epc', email: admin },
  { name: 'set-aside-release', path: '/set-aside', email: admin, act: askToRelease },
  { name: 'what-to-look-at', path: '/what-to-look-at', email: admin },
  { name: 'what-to-look-at-owner', path: '/what-to-look-at', email: owner },
  { name: 'look-up', path: '/alerts', email: owner, act: lookUp },
];

const nothing = { data: [], next: null };

/** What the server would answer somebody who has nothing. */
export const emptyAnswers = [
  [/\/api\/equipment(\?.*)?$/, nothing],
  [/\/api\/alerts(\?.*)?$/, { ...nothing, count: 0 }],
  [/\/api\/watches(\?.*)?$/, nothing],
  [/\/api\/rebuilds(\?.*)?$/, nothing],
  [/\/api\/held-reads(\?.*)?$/, { ...nothing, counts: [] }],
  [/\/api\/doubts(\?.*)?$/, { ...nothing, counts: { doubts: 0, units: 0, clocks: [] } }],
  [/\/api\/map/, { type: 'FeatureCollection', features: [] }],
  [
    /\/api\/fleet\/summary/,
    {
      data: {
        total: 0,
        onHand: 0,
        enRoute: 0,
        unseen: 0,
        quiet: 0,
        pastLimit: 0,
        readLast24h: 0,
        oldestPastLimit: null,
        asOf: new Date().toISOString(),
        projectorLagMs: 0,
      },
    },
  ],
];
