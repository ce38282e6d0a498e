// Uses the workbench as a person would.
import fs from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { createRequire } from 'node:module';

const here = import.meta.dirname;
const { chromium } = createRequire(path.join(here, '../'))('playwright-core');
const base = process.env.BASE, files = process.env.FILES;
const shots = process.env.SHOTS ?? fs.mkdtempSync(path.join(os.tmpdir(), 'vscode-'));
fs.mkdirSync(shots, { recursive: true });
const browser = await chromium.launch({
  executablePath: process.env.CHROMIUM ?? '/usr/bin/chromium',
  args: ['--no-sandbox', '--disable-gpu', '--disable-quic', '--no-first-run', '--disable-background-networking', '--disable-component-update', '--disable-sync'],
});
const page = await (await browser.newContext({ viewport: { width: 1280, height: 800 } })).newPage();
const ok = (what, detail = '') => console.log(`ok   ${what} ${detail}`);
try {
  const target = `vscode-remote://${new URL(base).host}${files}/demo.bayes`;
  await page.goto(`${base}/?folder=${files}&payload=${encodeURIComponent(JSON.stringify([['openFile', target]]))}`);
  await page.waitForSelector('.monaco-workbench', { timeout: 60000 });
  await page.waitForSelector('.monaco-editor .view-line', { timeout: 60000 });
  await page.waitForSelector('.squiggly-error', { timeout: 60000 });
  ok('finding underlined');
  await page.screenshot({ path: path.join(shots, '1-finding.png') });
  const word = page.locator('.view-line', { hasText: 'Beta(0, 0)' }).locator('span', { hasText: /^Beta$/ }).last();
  await word.hover();
  await page.waitForFunction(() => [...document.querySelectorAll('.monaco-hover .hover-row')].some((r) => r.textContent.includes('No posterior')), null, { timeout: 20000 });
  ok('hover');
  await page.screenshot({ path: path.join(shots, '2-hover.png') });
  await page.keyboard.press('Escape');
  let open = false;
  for (let i = 0; i < 8 && !open; i++) { // Ctrl+. is swallowed now and then while the focus moves
    await word.click();
    await page.waitForSelector('.monaco-editor.focused', { timeout: 5000 });
    await page.keyboard.press('Control+Period');
    open = await page.waitForSelector('.action-widget .monaco-list-row.action', { timeout: 3000 }).then(() => true, () => false);
    if (!open) await page.keyboard.press('Escape');
  }
  if (!open) throw new Error('the quick-fix menu never opened');
  await page.screenshot({ path: path.join(shots, '3-fixes.png') });
  const fix = page.locator('.action-widget .monaco-list-row.action', { hasText: 'Beta(1/2, 1/2)' }).first();
  ok('fix offered', (await fix.innerText()).replace(/\s+/g, ' '));
  await fix.click();
  await page.waitForFunction(() => [...document.querySelectorAll('.view-line')].some((l) => l.textContent.replace(/\u00a0/g, ' ').includes('Beta(1/2, 1/2)')), null, { timeout: 15000 });
  await page.waitForSelector('.squiggly-error', { state: 'detached', timeout: 20000 });
  await page.keyboard.press('Control+S');
  const saved = () => fs.readFileSync(path.join(files, 'demo.bayes'), 'utf8').includes('prior p as Beta(1/2, 1/2)');
  for (let i = 0; i < 100 && !saved(); i++) await page.waitForTimeout(100);
  if (!saved()) throw new Error('the file on disk is not the fixed one');
  ok('fix applied and saved');
  await page.keyboard.press('Control+End');
  await page.keyboard.type('\nunk');
  await page.keyboard.press('Control+Space');
  await page.waitForFunction(() => [...document.querySelectorAll('.suggest-widget .monaco-list-row')].some((r) => r.textContent.includes('unknown')), null, { timeout: 15000 });
  ok('completion');
  await page.screenshot({ path: path.join(shots, '4-completion.png') });
  console.log(`PASS pictures in ${shots}`);
} catch (problem) {
  await page.screenshot({ path: path.join(shots, 'failed.png') });
  console.log(`FAIL ${problem} pictures in ${shots}`);
  process.exitCode = 1;
} finally {
  await browser.close();
}
