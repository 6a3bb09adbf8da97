// What the cases share: the browser, pages on samples, and the samples' data to work out from it
// what a page should show.

import assert from 'node:assert/strict';
import {execFileSync} from 'node:child_process';
import {mkdtempSync, readFileSync, rmSync} from 'node:fs';
import {tmpdir} from 'node:os';
import {join} from 'node:path';
import {pathToFileURL} from 'node:url';
import {chromium} from 'playwright-core';

const [render, browserPath] = process.argv.slice(2);
if (!render || !browserPath) {
  console.error('usage: node page_test.mjs RENDER_SAMPLE CHROMIUM');
  process.exit(2);
}
const folder = mkdtempSync(join(tmpdir(), 'page-test-'));
export const sample = (rows) => {
  const path = join(folder, `${rows}.html`);
  execFileSync(render, [String(rows), path]);
  const html = readFileSync(path, 'utf8');
  const block = html.split('<script type="application/json" id="data">')[1].split('</script>')[0];
  return {url: pathToFileURL(path).href, html, data: JSON.parse(block)};
};

const browser = await chromium.launch({
  executablePath: browserPath,
  args: [
    '--no-sandbox', '--disable-gpu', '--disable-quic', '--no-first-run',
    '--disable-background-networking', '--disable-component-update', '--disable-sync'
  ],
});
export const small = sample(1500);
export const {data} = small;
export const all = data.phrases.text.length;
export const rowCount = data.near_misses.text.length;

let passed = 0;
let failed = 0;

// Runs a test on a page of its own, opened on the sample; at its end the page must have had no
// error and asked for nothing but itself.
export async function test(name, work, options = {}) {
  const context = await browser.newContext(
      {viewport: {width: 1280, height: 900}, acceptDownloads: true, ...options.context});
  const page = await context.newPage();
  const complaints = [];
  page.on('console', (message) => {
    if (['error', 'warning'].includes(message.type())) complaints.push(message.text());
  });
  page.on('pageerror', (error) => complaints.push(error.stack));
  context.on('request', (request) => {
    if (request.url() !== (options.url || small.url) && !request.url().startsWith('blob:')) {
      complaints.push(`asked for ${request.url()}`);
    }
  });
  page.setDefaultTimeout(15000);
  try {
    if (options.before) await options.before(page);
    await page.goto(options.url || small.url);
    await page.waitForSelector('#phrases tr[data-row]');
    await work(page);
    if (!options.complains) assert.deepEqual(complaints, []);
    passed += 1;
    console.log(`ok ${name}`);
  } catch (error) {
    failed += 1;
    console.log(`FAILED ${name}\n${error.stack}\n${complaints.join('\n')}`);
  }
  await context.close();
}

export const texts = (page, table) =>
    page.locator(`#${table} tr[data-row] .open-row`).allTextContents();
export const found = async (page, phrases, near) => {
  await page.waitForFunction(
      ([text]) => document.getElementById('found').textContent.startsWith(text),
      [`${phrases.toLocaleString('en')} of ${all.toLocaleString('en')} phrases, ${near} of ${
          rowCount} near misses`]);
};
export const rowOf = async (page, text) => {
  await page.fill('#filter-text', text);
  return page.locator('#phrases tr[data-row]').first();
};

// Each merge of the data block with its phrase or near miss.
export const merges = [];
data.phrases.merges.forEach((size, row) => {
  for (let i = 0; i < size; ++i) merges.push({kind: 'phrases', row});
});
data.near_misses.text.forEach((_, row) => merges.push({kind: 'near', row}));
merges.forEach((merge, i) => Object.assign(merge, {
  n: data.merges.n[i],
  pass: data.merges.pass[i],
  pmi: (data.merges.scores.pmi || [])[i],
  documents: data.merges.documents[i]
}));
export const rowsWith = (kind, holds) =>
    new Set(merges.filter((merge) => merge.kind === kind && holds(merge)).map((merge) => merge.row))
        .size;
export const rule = async (page, button, kind, reason) => {
  await button.click();
  await page.check(`#kind-${kind}`);
  await page.fill('#ruling-reason', reason);
  await page.click('#ruling-set');
};
export const saved = async (page) => {
  const [download] = await Promise.all([page.waitForEvent('download'), page.click('#bar-save')]);
  assert.equal(download.suggestedFilename(), 'rulings.yaml');
  return readFileSync(await download.path(), 'utf8');
};

// Closes the browser and tells how it went.
export async function finish() {
  await browser.close();
  rmSync(folder, {recursive: true});
  console.log(`${passed} passed, ${failed} failed`);
  process.exit(failed === 0 ? 0 : 1);
}
