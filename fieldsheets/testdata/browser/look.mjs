// Opens pages in headless Chromium and prints what is wrong with them as JSON lines. Usage:
//   PAGE_TOOLS=folder-with-node_modules CHROMIUM=path node look.mjs page.html...
// Looked at: console messages, requests beyond the page itself, overflow at phone, tablet and desk width and on printed A4 and Letter,
// and the rules of axe-core (serious and critical), light and dark.
import { createRequire } from 'node:module';
import { readFileSync } from 'node:fs';
import { pathToFileURL } from 'node:url';
import path from 'node:path';

const require = createRequire(path.join(process.env.PAGE_TOOLS, 'package.json'));
const { chromium } = require('playwright-core');
const axe = readFileSync(require.resolve('axe-core/axe.min.js'), 'utf8');
const say = (page, what, detail) => console.log(JSON.stringify({ page, what, detail }));

const browser = await chromium.launch({
  executablePath: process.env.CHROMIUM,
  args: ['--no-sandbox', '--disable-gpu', '--disable-quic', '--no-first-run', '--disable-background-networking', '--disable-component-update', '--disable-sync'],
});
for (const file of process.argv.slice(2)) {
  const url = pathToFileURL(path.resolve(file)).href;
  for (const colorScheme of ['light', 'dark']) {
    const context = await browser.newContext({ colorScheme });
    const page = await context.newPage();
    page.on('console', (m) => say(file, 'console', m.text()));
    page.on('pageerror', (e) => say(file, 'error', String(e)));
    page.on('request', (r) => { if (r.url() !== url) say(file, 'request', r.url()); });
    await page.goto(url);
    for (const width of [360, 768, 1280]) {
      await page.setViewportSize({ width, height: 900 });
      const wide = await page.evaluate(() => document.documentElement.scrollWidth);
      if (wide > width) say(file, 'overflow', `${wide} px on a screen of ${width} px, ${colorScheme}`);
    }
    await page.evaluate(axe);
    const found = await page.evaluate(() => window.axe.run(document, { resultTypes: ['violations'] }));
    for (const v of found.violations) {
      if (v.impact === 'serious' || v.impact === 'critical') say(file, 'axe', `${v.id}, ${colorScheme}: ${v.help}; ${v.nodes[0].html.slice(0, 160)}`);
    }
    if (colorScheme === 'light') {
      await page.emulateMedia({ media: 'print' });
      for (const [name, width] of [['A4', 210 - 28], ['Letter', 216 - 28]]) { // less the margins of the sheet
        const px = Math.round((width / 25.4) * 96);
        await page.setViewportSize({ width: px, height: 1000 });
        const wide = await page.evaluate(() => document.documentElement.scrollWidth);
        if (wide > px) say(file, 'overflow', `${wide} px on printed ${name} of ${px} px`);
      }
    }
    await context.close();
  }
}
await browser.close();
console.log('looked at every page');
