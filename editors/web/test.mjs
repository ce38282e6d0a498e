// Opens the page in headless Chromium and uses it as a person would.
import fs from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { createRequire } from 'node:module';
import { serve } from './serve.mjs';

const here = import.meta.dirname;
const { chromium } = createRequire(path.join(here, 'page/'))('playwright-core');
const server = await serve(path.join(here, 'dist'), 0);
const base = `http://127.0.0.1:${server.address().port}/`;
const shots = process.env.SHOTS ?? fs.mkdtempSync(path.join(os.tmpdir(), 'page-'));
fs.mkdirSync(shots, { recursive: true });
const browser = await chromium.launch({
  executablePath: process.env.CHROMIUM ?? '/usr/bin/chromium',
  args: ['--no-sandbox', '--disable-gpu', '--disable-quic', '--no-first-run', '--disable-background-networking', '--disable-component-update', '--disable-sync'],
});
let failed = 0;
const check = (what, ok, detail = '') => {
  console.log(`${ok ? 'ok  ' : 'FAIL'} ${what} ${detail}`);
  if (!ok) failed++;
};
try {
  const page = await browser.newPage({ viewport: { width: 1200, height: 800 } });
  const outside = [];
  page.on('request', (request) => { if (!request.url().startsWith(base) && !request.url().startsWith('data:')) outside.push(request.url()); });
  page.on('pageerror', (error) => check('no error on the page', false, String(error)));
  await page.goto(base);
  await page.waitForFunction(() => document.body.innerText.includes('posterior-does-not-exist'), null, { timeout: 60000 });
  const first = Number(await page.evaluate(() => document.body.dataset.first));
  check('first finding', first > 0, `${first} ms after load began`);
  check('squiggle', await page.locator('.cm-lintRange-error').count() > 0);
  await page.screenshot({ path: path.join(shots, '1-finding.png') });
  await page.locator('.cm-line', { hasText: 'Beta(0, 0)' }).locator('span', { hasText: 'Beta' }).first().hover();
  await page.waitForFunction(() => [...document.querySelectorAll('.cm-tooltip')].some((t) => t.innerText.includes('No posterior')), null, { timeout: 15000 });
  check('hover', true);
  await page.screenshot({ path: path.join(shots, '2-hover.png') });
  const fix = page.locator('button.fix', { hasText: 'Beta(1/2, 1/2)' }).first();
  check('fix offered', await fix.count() === 1, await fix.textContent());
  await fix.click();
  await page.waitForFunction(() => !document.body.innerText.includes('posterior-does-not-exist'), null, { timeout: 30000 });
  check('fix applied', (await page.locator('.cm-content').innerText()).includes('Beta(1/2, 1/2)'));
  await page.screenshot({ path: path.join(shots, '3-fixed.png') });
  await page.locator('.cm-content').click();
  await page.keyboard.press('Control+End');
  await page.keyboard.type('\nunk');
  await page.keyboard.press('Control+Space');
  const completed = await page.waitForFunction(() => [...document.querySelectorAll('.cm-completionLabel')].some((l) => l.textContent === 'unknown'), null, { timeout: 10000 }).then(() => true, () => false);
  check('completion', completed);
  await page.screenshot({ path: path.join(shots, '4-completion.png') });
  await page.setViewportSize({ width: 360, height: 740 });
  check('readable at 360 px', await page.evaluate(() => document.documentElement.scrollWidth <= 360));
  await page.emulateMedia({ colorScheme: 'dark' });
  await page.screenshot({ path: path.join(shots, '5-narrow-dark.png') });
  check('no request to another place', outside.length === 0, outside.join(' '));
  const packed = fs.statSync(path.join(here, 'dist/wellposed.wasm.gz')).size + fs.statSync(path.join(here, 'dist/app.js.gz')).size;
  check('under 5 MB compressed', packed < 5e6, `${(packed / 1e6).toFixed(2)} MB`);
} catch (problem) {
  check('the run', false, String(problem));
} finally {
  await browser.close();
  server.close();
}
console.log(`${failed ? 'FAIL' : 'PASS'} pictures in ${shots}`);
process.exit(failed ? 1 : 0);
