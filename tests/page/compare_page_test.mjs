// node compare_page_test.mjs RENDER_COMPARISON CHROMIUM [SCREENSHOTS]: drives the page of a
// comparison in a browser. Pages come from render_comparison, their data is invented. Where a
// folder is given, pictures of the page at two widths are put there to look at.

import assert from 'node:assert/strict';
import {execFileSync} from 'node:child_process';
import {mkdtempSync, rmSync} from 'node:fs';
import {tmpdir} from 'node:os';
import {join} from 'node:path';
import {pathToFileURL} from 'node:url';
import {chromium} from 'playwright-core';

const [render, browserPath, pictures] = process.argv.slice(2);
if (!render || !browserPath) {
  console.error('usage: node compare_page_test.mjs RENDER_COMPARISON CHROMIUM [SCREENSHOTS]');
  process.exit(2);
}
const folder = mkdtempSync(join(tmpdir(), 'compare-page-test-'));
const sample = (rows) => {
  const path = join(folder, `${rows}.html`);
  execFileSync(render, [String(rows), path]);
  return pathToFileURL(path).href;
};
const url = sample(300);
const browser = await chromium.launch({
  executablePath: browserPath,
  args: [
    '--no-sandbox', '--disable-gpu', '--disable-quic', '--no-first-run',
    '--disable-background-networking', '--disable-component-update', '--disable-sync'
  ],
});
let failed = 0;

// Runs a test on a page of its own; at its end the page must have had no error and asked for
// nothing but itself.
async function test(name, work, options = {}) {
  const context = await browser.newContext({viewport: {width: 1280, height: 900}, ...options});
  const page = await context.newPage();
  const complaints = [];
  page.on('console', (message) => {
    if (['error', 'warning'].includes(message.type())) complaints.push(message.text());
  });
  page.on('pageerror', (error) => complaints.push(error.stack));
  context.on('request', (request) => {
    if (!request.url().startsWith('file:')) complaints.push(`asked for ${request.url()}`);
  });
  page.setDefaultTimeout(15000);
  try {
    await page.goto(options.url || url);
    await work(page);
    assert.deepEqual(complaints, []);
    console.log(`ok ${name}`);
  } catch (error) {
    failed += 1;
    console.log(`FAILED ${name}\n${error.stack}\n${complaints.join('\n')}`);
  }
  await context.close();
}

const cells = (page, list, column) =>
    page.locator(`table[data-name=${list}] tbody tr:visible td:nth-child(${column})`)
        .allTextContents();

await test('tells the numbers at the top', async (page) => {
  assert.equal(
      await page.locator('.lede').textContent(), '300 gained, 300 lost, 300 kept, of which 150 changed');
});

await test('hostile texts stay texts', async (page) => {
  assert.equal(await page.evaluate(() => window.broken), undefined);
  assert.equal(await page.locator('img').count(), 0);
  assert.equal(await page.locator('script').count(), 1);
  const texts = await cells(page, 'gained', 1);
  assert.equal(texts[0], '<script>window.broken=1</script> x');
  assert.equal(texts[2], '" onmouseover="window.broken=1');
  assert.equal(texts[5], '<!-- --> &amp; \uFFFD\uFFFD');
});

await test('filters all lists at once', async (page) => {
  await page.fill('#filter-text', 'MILL123 ');
  for (const list of ['gained', 'lost', 'kept']) {
    assert.deepEqual(await cells(page, list, 1), [`${list} mill123 wheel`]);
  }
  assert.equal(await page.locator('#found').textContent(), '1 gained, 1 lost, 1 kept');
  await page.fill('#filter-text', '');
  assert.equal((await cells(page, 'lost', 1)).length, 300);
});

await test('sorts by exact values both ways, from the keyboard too', async (page) => {
  const numbers = async () => (await cells(page, 'gained', 2)).map((x) => Number(x.replaceAll(',', '')));
  const title = page.locator('table[data-name=gained] thead button', {hasText: 'occurrences'});
  await title.click();
  let values = await numbers();
  assert.deepEqual(values, [...values].sort((a, b) => b - a));
  assert.equal(
      await page.locator('table[data-name=gained] th[aria-sort]').getAttribute('aria-sort'),
      'descending');
  await title.focus();
  await page.keyboard.press('Enter');
  values = await numbers();
  assert.deepEqual(values, [...values].sort((a, b) => a - b));
});

await test('kept phrases sort by how much they changed', async (page) => {
  await page.locator('table[data-name=kept] thead button', {hasText: 'occurrences'}).click();
  const first = (await cells(page, 'kept', 2))[0];
  const [before, after] = first.split(' → ').map((x) => Number(x.replaceAll(',', '')));
  assert.equal(after - before, 7 * 299);
});

await test('is whole without its script', async (page) => {
  assert.equal((await cells(page, 'kept', 1)).length, 300);
  assert.equal(await page.locator('#filter-text').isVisible(), false);
}, {javaScriptEnabled: false});

await test('the policy allows no script and no style but its own', async (page) => {
  const policy = await page.locator('meta[http-equiv]').getAttribute('content');
  assert.match(policy, /^default-src 'none'; style-src 'sha256-[^']+'; script-src 'sha256-[^']+'; /);
  assert.notEqual(
      await page.evaluate(() => getComputedStyle(document.querySelector('.side')).borderTopStyle),
      'none');
});

await test('light and dark differ, and can be chosen', async (page) => {
  const ground = () => page.evaluate(() => getComputedStyle(document.body).backgroundColor);
  const seen = new Set([await ground()]);
  await page.click('#theme');
  seen.add(await ground());
  await page.click('#theme');
  seen.add(await ground());
  assert.equal(seen.size, 2);
});

for (const width of [1280, 400]) {
  await test(`nothing hangs out of ${width} pixels`, async (page) => {
    assert.ok(await page.evaluate(() => document.documentElement.scrollWidth) <= width);
    if (pictures) await page.screenshot({path: join(pictures, `compare-${width}.png`), fullPage: true});
  }, {viewport: {width, height: 900}});
}

await test('long lists say what they leave out', async (page) => {
  assert.equal((await cells(page, 'gained', 1)).length, 2000);
  assert.match(await page.locator('main').textContent(), /500 more are not shown here/);
}, {url: sample(2500)});

await browser.close();
rmSync(folder, {recursive: true});
process.exit(failed === 0 ? 0 : 1);
