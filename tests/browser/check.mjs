// Opens every note of a folder and fails on a message of the console, a request beyond the file itself, a
// formula without size, a page wider than its window, or a violation that axe-core finds.
//
// node check.mjs BROWSER NOTES SHOTS

import { readdirSync, readFileSync, mkdtempSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { pathToFileURL } from 'node:url';
import { chromium } from 'playwright-core';

const [browserPath, notes, shots] = process.argv.slice(2);
const axe = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8');
const WIDTHS = [1100, 420];
const SCHEMES = ['light', 'dark'];
const faults = [];

const context = await chromium.launchPersistentContext(mkdtempSync(join(tmpdir(), 'browser-')), {
  executablePath: browserPath,
  headless: true,
  args: [
    '--no-sandbox', '--disable-gpu', '--disable-quic', '--no-first-run',
    '--disable-background-networking', '--disable-component-update', '--disable-sync',
  ],
});

async function look(name) {
  const fault = (words) => faults.push(`${name}: ${words}`);
  const page = await context.newPage();
  page.on('console', (message) => fault(`console: ${message.text()}`));
  page.on('pageerror', (error) => fault(`error: ${error.message}`));
  const address = pathToFileURL(resolve(notes, `${name}.html`)).href;
  page.on('request', (request) => {
    if (request.url() !== address) fault(`requests ${request.url()}`);
  });
  for (const width of WIDTHS) {
    await page.setViewportSize({ width, height: 900 });
    for (const colorScheme of SCHEMES) {
      await page.emulateMedia({ media: 'screen', colorScheme });
      await page.goto(address);
      const state = await page.evaluate(() => {
        const boxes = [...document.querySelectorAll('math')].map((m) => m.getBoundingClientRect());
        return {
          formulas: boxes.length,
          flat: boxes.filter((box) => box.width < 2 || box.height < 2).length,
          scripts: document.scripts.length,
          excess: document.documentElement.scrollWidth - window.innerWidth,
          unnamed: [...document.querySelectorAll('svg')].filter((s) => !s.querySelector('title')).length,
        };
      });
      if (state.formulas === 0) fault('no formulas');
      if (state.flat > 0) fault(`${state.flat} formulas without size`);
      if (state.scripts > 0) fault('scripts');
      if (state.excess > 0) fault(`${state.excess} pixels wider than a window of ${width}`);
      if (state.unnamed > 0) fault('pictures without a title');
      await page.screenshot({ path: join(shots, `${name}-${colorScheme}-${width}.png`), fullPage: true });
      // Two of the four say all: every colour and every width once.
      if ((width === WIDTHS[0]) !== (colorScheme === SCHEMES[0])) continue;
      // The page's own policy forbids scripts, so axe comes through the debugger.
      const session = await context.newCDPSession(page);
      await session.send('Runtime.evaluate', { expression: axe });
      const { result } = await session.send('Runtime.evaluate', {
        expression: 'axe.run(document).then((found) => JSON.stringify(found.violations.map(' +
          '(v) => v.id + ": " + v.nodes.slice(0, 3).map((n) => n.html.slice(0, 120)).join(" | "))))',
        awaitPromise: true,
        returnByValue: true,
      });
      for (const violation of JSON.parse(result.value)) fault(`${colorScheme} ${width}: ${violation}`);
      await session.detach();
    }
  }
  await page.emulateMedia({ media: 'print', colorScheme: 'dark' });
  await page.goto(address);
  const paper = await page.evaluate(() => getComputedStyle(document.body).backgroundColor);
  if (paper !== 'rgb(255, 255, 255)') fault(`prints on ${paper}`);
  for (const width of ['210mm', '148mm']) {
    await page.pdf({ path: join(shots, `${name}-${width}.pdf`), width, height: '297mm', printBackground: true });
  }
  await page.close();
}

const names = readdirSync(notes).filter((file) => file.endsWith('.html'));
for (const name of names) await look(name.replace(/\.html$/, ''));
await context.close();
for (const words of new Set(faults)) console.error(words);
console.log(`${names.length} notes, ${faults.length} faults`);
process.exit(faults.length === 0 && names.length > 0 ? 0 : 1);
