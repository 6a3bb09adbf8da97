// Names, contrast, colours, paper, a narrow screen, and a large run.

import assert from 'node:assert/strict';

import {rule, sample, test} from './harness.mjs';

await test('every control has a name', async (page) => {
  const nameless = await page.evaluate(
      () => [...document.querySelectorAll('button, input, select, [tabindex=\'0\']')]
                .filter(
                    (node) =>
                        !(node.textContent.trim() || node.getAttribute('aria-label') ||
                          node.getAttribute('aria-labelledby') ||
                          (node.labels && node.labels.length > 0)))
                .map((node) => node.outerHTML));
  assert.deepEqual(nameless, []);
});

// WCAG 2.1, success criterion 1.4.3: 4.5 to 1 for text; and 1.4.11: 3 to 1 for what carries
// meaning.
for (const scheme of ['light', 'dark']) {
  await test(`contrast is enough in the ${scheme} scheme`, async (page) => {
    const ratios = await page.evaluate(() => {
      const pen = document.createElement('canvas').getContext('2d', {willReadFrequently: true});
      const probe = document.body.appendChild(document.createElement('span'));
      const luminance = (name) => {
        probe.style.color = `var(--${name})`;
        pen.fillStyle = getComputedStyle(probe).color;
        pen.fillRect(0, 0, 1, 1);
        const [r, g, b] = [...pen.getImageData(0, 0, 1, 1).data].map((part) => {
          const value = part / 255;
          return value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4;
        });
        return 0.2126 * r + 0.7152 * g + 0.0722 * b;
      };
      const ratio = (a, b) => {
        const [low, high] = [luminance(a), luminance(b)].sort((x, y) => x - y);
        return (high + 0.05) / (low + 0.05);
      };
      const pairs = [];
      for (const ground of ['ground', 'plate', 'recess']) {
        for (const ink of ['ink', 'quiet', 'seam', 'heat'])
          pairs.push([`${ink} on ${ground}`, ratio(ink, ground), 4.5]);
        pairs.push([`focus on ${ground}`, ratio('focus', ground), 3]);
      }
      pairs.push(['plate on seam', ratio('plate', 'seam'), 4.5]);
      return pairs;
    });
    assert.deepEqual(ratios.filter(([, ratio, least]) => ratio < least), []);
  }, {context: {colorScheme: scheme}});
}

await test('the colours can be chosen, and stay chosen', async (page) => {
  const ground = () => page.evaluate(() => getComputedStyle(document.body).backgroundColor);
  const light = await ground();
  await page.click('#theme');
  assert.equal(await page.textContent('#theme'), 'Colours: light');
  assert.equal(await ground(), light);
  await page.click('#theme');
  const dark = await ground();
  assert.notEqual(dark, light);
  await page.reload();
  await page.waitForSelector('#phrases tr[data-row]');
  assert.equal(await ground(), dark);
}, {context: {colorScheme: 'light'}});

await test('paper gets the overview and the first rows', async (page) => {
  await page.emulateMedia({media: 'print'});
  await page.waitForFunction(
      () => document.querySelectorAll('#phrases tr[data-row]').length === 60);
  assert.ok(await page.locator('#filters').isHidden());
  assert.match(
      await page.textContent('#print-note'),
      /^Printed: the first 60 of 1,507 phrases and 60 of 180/);
  const pdf = await page.pdf();
  const sheets = pdf.toString('latin1').match(/\/Type \/Page\b/g).length;
  assert.ok(sheets >= 3 && sheets <= 14, `${sheets} sheets`);
  await page.emulateMedia({media: null});
  await page.waitForFunction(() => document.querySelectorAll('#phrases tr[data-row]').length < 60);
});

await test('nothing is wider than a telephone\'s 400 pixels', async (page) => {
  await page.locator('#phrases [data-role="open"]').first().click();
  await page.locator('#near [data-role="open"]').first().click();
  await rule(page, page.locator('#phrases [data-role="rule"]').nth(1), 'never', 'x');
  assert.equal(await page.evaluate(() => document.documentElement.scrollWidth), 400);
  const wide = await page.evaluate(
      () => [...document.querySelectorAll('#phrases, #near')]
                .filter((node) => node.scrollWidth > node.clientWidth + 1)
                .map((node) => node.id));
  assert.deepEqual(wide, []);
  const heights =
      await page.locator('#phrases tr[data-row]:not(.open)')
          .evaluateAll(
              (rows) => [...new Set(rows.map((row) => row.getBoundingClientRect().height))]);
  assert.deepEqual(heights, [72]);
}, {context: {viewport: {width: 400, height: 800}}});

// Printed, not judged: times travel from no machine to another.
const large = sample(50000);
await test('50,000 phrases open and answer', async (page) => {
  const ready = await page.evaluate(() => performance.now());
  const paint = await page.evaluate(
      () => performance.getEntriesByName('first-contentful-paint')[0]?.startTime);
  const timed = (action) => page.evaluate(async (name) => {
    const start = performance.now();
    const input = document.getElementById('filter-text');
    if (name === 'filter') {
      input.value = 'brace';
      input.dispatchEvent(new Event('input', {bubbles: true}));
    } else if (name === 'sort') {
      document.querySelector('#phrases thead .c-phrase button').click();
    } else {
      document.getElementById('phrases').scrollTop = 700000;
    }
    await new Promise((done) => requestAnimationFrame(() => setTimeout(done)));
    return performance.now() - start;
  }, action);
  const times = {
    scroll: await timed('scroll'),
    filter: await timed('filter'),
    again: await timed('filter'),
    sort: await timed('sort')
  };
  const expected = large.data.phrases.text.filter((text) => text.includes('brace')).length;
  assert.ok((await page.textContent('#found')).startsWith(`${expected.toLocaleString('en')} of `));
  console.log(
      `   ${(large.html.length / 2 ** 20).toFixed(1)} MiB; first paint ${
          paint?.toFixed(0)} ms, rows at ${ready.toFixed(0)} ms; ` +
      Object.entries(times).map(([name, ms]) => `${name} ${ms.toFixed(0)} ms`).join(', '));
}, {url: large.url});
