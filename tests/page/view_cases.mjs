// Overview, plot, tables and filters.

import assert from 'node:assert/strict';

import {all, data, found, merges, rowCount, rowOf, rowsWith, test, texts} from './harness.mjs';

await test('the overview tells the job, the share and a balance', async (page) => {
  assert.equal(await page.title(), 'mill-repairs – Phraseweld report');
  assert.equal(await page.textContent('h1'), 'mill-repairs');
  const inside = data.phrases.text.reduce(
      (sum, _, row) => sum + data.phrases.occurrences[row] * data.phrases.words[row], 0);
  const total = data.passes[0].tokens_in;
  const share = await page.textContent('#share');
  assert.ok(share.includes(`${((100 * inside) / total).toFixed(1)} %`), share);
  assert.ok(share.includes(inside.toLocaleString('en')), share);
  assert.equal(await page.locator('#passes tbody tr').count(), data.passes.length);
  assert.match(await page.textContent('#balance'), /^It balances/);
  assert.match(await page.textContent('#lede'), /18,204 documents in 4 files, 46.1 MiB/);
});

await test('only rows in sight exist, and each tells its place among all', async (page) => {
  const rows = await page.locator('#phrases tr[data-row]').count();
  assert.ok(rows > 10 && rows < 60, `${rows} rows`);
  assert.equal(await page.getAttribute('#phrases table', 'aria-rowcount'), String(all + 1));
  await page.locator('#phrases').evaluate((node) => node.scrollTo(0, node.scrollHeight));
  await page.waitForSelector(`#phrases tr[aria-rowindex="${all + 1}"]`);
  const last = page.locator(`#phrases tr[aria-rowindex="${all + 1}"]`);
  assert.ok(await last.isVisible());
  assert.ok((await page.locator('#phrases tr[data-row]').count()) < 60);
});

await test('columns sort both ways', async (page) => {
  const made =
      data.phrases.text.map((_, i) => data.phrases.occurrences[i] + data.phrases.inside_longer[i]);
  const first = () => page.locator('#phrases tr[data-row]').first();
  assert.equal(
      await first().locator('.c-all').textContent(), Math.max(...made).toLocaleString('en'));
  const head = page.locator('#phrases thead .c-phrase');
  await head.locator('button').click();
  assert.equal(await head.getAttribute('aria-sort'), 'ascending');
  const sorted = [...data.phrases.text].sort((a, b) => (a < b ? -1 : a > b ? 1 : 0));
  assert.deepEqual((await texts(page, 'phrases')).slice(0, 12), sorted.slice(0, 12));
  await head.locator('button').click();
  assert.equal(await head.getAttribute('aria-sort'), 'descending');
  assert.deepEqual((await texts(page, 'phrases')).slice(0, 12), sorted.reverse().slice(0, 12));
  await page.click('#phrases thead .c-score button');
  assert.equal(
      await first().locator('.c-score').textContent(),
      Math.max(...merges.filter((m) => m.kind === 'phrases' && m.pmi).map((m) => m.pmi))
          .toFixed(2));
  await page.click('#near thead .c-failed button');
  const share = await page.locator('#near .c-failed .failed-text').allTextContents();
  const reached = share.map((text) => text.match(/([\d.]+) < ([\d.]+)/)).map((m) => m[1] / m[2]);
  assert.ok(
      reached[0] > 0.9 && reached.every((value, i) => i === 0 || value <= reached[i - 1] + 0.01));
});

await test('filters by words, pass, length and documents', async (page) => {
  const holds = (test_) => data.phrases.text.filter((text, i) => test_(text, i)).length;
  const near = (test_) => data.near_misses.text.filter((text, i) => test_(text, i)).length;
  await page.fill('#filter-text', 'Brace  oak');
  const both = (text) => text.includes('brace') && text.includes('oak');
  await found(page, holds(both), near(both));
  await page.click('#filter-reset');
  await found(page, all, rowCount);
  await page.selectOption('#filter-pass', '2');
  await found(
      page, rowsWith('phrases', (m) => m.pass === 2), rowsWith('near', (m) => m.pass === 2));
  await page.selectOption('#filter-words', '3');
  await found(page, rowsWith('phrases', (m) => m.pass === 2 && data.phrases.words[m.row] === 3), 0);
  await page.fill('#filter-documents', '40');
  await found(
      page,
      rowsWith(
          'phrases',
          (m) => m.pass === 2 && data.phrases.words[m.row] === 3 &&
              data.phrases.documents[m.row] >= 40),
      0);
  await page.fill('#filter-text', 'no such words');
  await found(page, 0, 0);
  assert.ok(await page.locator('#phrases .none').isVisible());
});

await test('a rectangle drawn on the plot filters the tables, Escape drops it', async (page) => {
  await page.locator('#plot').scrollIntoViewIfNeeded();
  const box = await page.locator('#plot').boundingBox();
  await page.mouse.move(box.x + 300, box.y + 60);
  await page.mouse.down();
  await page.mouse.move(box.x + 500, box.y + 150, {steps: 4});
  await page.mouse.up();
  await page.waitForFunction(
      () => document.getElementById('found').textContent.includes('rectangle'));
  const number = async (id) => Number((await page.textContent(id)).replace(',', ''));
  const [left, right] = [await number('#brush-x-low-text'), await number('#brush-x-high-text')];
  const [low, high] = [await number('#brush-y-low-text'), await number('#brush-y-high-text')];
  const inside = (slack) => (m) =>
      m.n >= left && m.n <= right && m.pmi >= low - slack && m.pmi <= high + slack;
  const shown = Number((await page.textContent('#found')).split(' ')[0].replace(',', ''));
  // The texts round the scores to two decimals, so the count is known to within that.
  assert.ok(shown > 10 && shown < all / 2, String(shown));
  assert.ok(
      rowsWith('phrases', inside(-0.006)) <= shown && shown <= rowsWith('phrases', inside(0.006)));
  await page.locator('#plot').focus();
  await page.keyboard.press('Escape');
  await found(page, all, rowCount);
});

await test('the rectangle can be set by keyboard alone', async (page) => {
  await page.focus('#brush-x-low');
  for (let i = 0; i < 3; ++i) await page.keyboard.press('PageUp');
  await page.waitForFunction(
      () => document.getElementById('found').textContent.includes('rectangle'));
  const least = Number((await page.textContent('#brush-x-low-text')).replace(',', ''));
  assert.ok(least > 10, String(least));
  assert.equal(
      await page.getAttribute('#brush-x-low', 'aria-valuetext'), least.toLocaleString('en'));
  await found(
      page, rowsWith('phrases', (m) => m.pass > 0 && m.n >= least),
      rowsWith('near', (m) => m.n >= least));
  await page.click('#brush-clear');
  await found(page, all, rowCount);
});

await test(
    'points name themselves under the pointer and to the arrow keys, Enter opens the row',
    async (page) => {
      await page.locator('#plot').focus();
      await page.keyboard.press('ArrowLeft');  // from the right end: the most frequent
      const most = Math.max(...merges.map((m) => m.n));
      const top = merges.find((m) => m.n === most);
      const said = await page.textContent('#plot [aria-live]');
      assert.ok(
          said.startsWith(
              `${data.phrases.text[top.row]}: ${most.toLocaleString('en')} occurrences in `),
          said);
      assert.ok(await page.locator('#plot .tag').isVisible());
      await page.keyboard.press('ArrowLeft');
      assert.notEqual(await page.textContent('#plot [aria-live]'), said);
      await page.keyboard.press('ArrowRight');
      await page.keyboard.press('Enter');
      await page.waitForSelector(`#phrases tr[data-row="${top.row}"].open`);
      await page.locator('#plot').scrollIntoViewIfNeeded();
      const ring = await page.locator('#plot').evaluate(
          () => document.querySelector('#plot .ring') === null);
      assert.ok(ring, 'the ring goes with the focus');
      const box = await page.locator('#plot').boundingBox();
      await page.mouse.move(box.x + 110, box.y + 100);
      await page.mouse.move(box.x + 76, box.y + 100);
      await page.waitForSelector('#plot .tag:not([hidden])');
      assert.match(await page.textContent('#plot .tag'), /5 occurrences in /);
    });

await test(
    'a row opens to its derivation, its contingency table and its contexts', async (page) => {
      const longer = data.phrases.text.findIndex(
          (text, i) => data.phrases.words[i] === 3 && data.phrases.pass[i] === 2 &&
              data.phrases.contexts[i] > 0);
      const row = await rowOf(page, data.phrases.text[longer]);
      await row.locator('.open-row').click();
      assert.equal(await row.locator('.open-row').getAttribute('aria-expanded'), 'true');
      const detail = row.locator('.detail');
      assert.equal(await detail.locator('.tree > li > ul > li').count(), 1);
      assert.match(await detail.locator('.tree > li > .made').textContent(), /^2 pass 2, rank \d/);
      assert.match(
          await detail.locator('.tree > li > ul .made').textContent(), /^1 pass 1, rank \d/);
      const cells = (await detail.locator('.contingency tbody td strong').allTextContents())
                        .map((text) => Number(text.replaceAll(',', '')));
      const margins = (await detail.locator('.contingency .margin').allTextContents())
                          .map((text) => Number(text.replaceAll(',', '')));
      assert.equal(cells[0] + cells[1], margins[0]);
      assert.equal(cells[2] + cells[3], margins[1]);
      assert.equal(cells[0] + cells[2], margins[2]);
      assert.equal(margins[0] + margins[1], margins[4]);
      assert.equal(await detail.locator('.contexts li').count(), 3);
      assert.equal(
          await detail.locator('.contexts mark').first().textContent(), data.phrases.text[longer]);
      assert.match(
          await detail.locator('.contexts .small').first().textContent(),
          /^document note-\d+, body, byte [\d,]+$/);
      await row.locator('.open-row').click();
      assert.equal(await row.locator('.detail').count(), 0);
    });

await test('an open row keeps its place while the table scrolls', async (page) => {
  await page.locator('#phrases [data-role="open"]').nth(2).click();
  const name = (await texts(page, 'phrases'))[2];
  await page.locator('#phrases').evaluate((node) => node.scrollTo(0, 20000));
  await page.waitForFunction(
      (text) => ![...document.querySelectorAll('#phrases tr:not(.out) .open-row')].some(
          (node) => node.textContent === text),
      name);
  const gap = await page.locator('#phrases').evaluate((node) => {
    const rows = [...node.querySelectorAll('tr[data-row]:not(.out)')].map(
        (row) => row.getBoundingClientRect());
    const box = node.getBoundingClientRect();
    return {
      covers: rows[0].top <= box.top + 40 && rows.at(-1).bottom >= box.bottom,
      even: rows.every((row, i) => i === 0 || Math.abs(row.top - rows[i - 1].bottom) < 0.6)
    };
  });
  assert.deepEqual(gap, {covers: true, even: true});
  await page.locator('#phrases').evaluate((node) => node.scrollTo(0, 0));
  await page.waitForSelector('#phrases tr.open .detail-box');
});

await test('near misses tell the gate that failed and by how much', async (page) => {
  const miss = data.near_misses.failed.indexOf('documents');
  await page.fill('#filter-text', data.near_misses.text[miss]);
  await page.selectOption(
      '#filter-pass', String(merges.filter((m) => m.kind === 'near')[miss].pass));
  const row = page.locator(`#near tr[data-row="${miss}"]`);
  const documents = merges.filter((m) => m.kind === 'near')[miss].documents;
  assert.equal(await row.locator('.failed-text').textContent(), `documents ${documents} < 3`);
  await row.locator('.open-row').click();
  assert.equal(
      await row.locator('.failure').textContent(),
      `Turned away by the gate documents: ${documents} is below 3.`);
  assert.match(await row.locator('.scores .fails').textContent(), /^documents\d✗ ≥ 3$/);
});

await test('the table is walked with the keyboard', async (page) => {
  await page.locator('#phrases [data-role="open"]').first().focus();
  await page.keyboard.press('ArrowDown');
  await page.keyboard.press('ArrowDown');
  const place = () =>
      page.evaluate(() => document.activeElement.closest('tr').getAttribute('aria-rowindex'));
  assert.equal(await place(), '4');
  await page.keyboard.press('End');
  assert.equal(await place(), String(all + 1));
  await page.keyboard.press('Home');
  assert.equal(await place(), '2');
  await page.keyboard.press('Enter');
  await page.waitForSelector('#phrases tr[aria-rowindex="2"].open');
  await page.keyboard.press('Tab');
  assert.equal(await page.evaluate(() => document.activeElement.dataset.role), 'rule');
  await page.keyboard.press('Tab');
  assert.ok(
      await page.evaluate(
          () => !document.querySelector('#phrases tbody').contains(document.activeElement)),
      'Tab leaves the table after one row');
});

await test('the first stop is a link past the overview', async (page) => {
  await page.keyboard.press('Tab');
  assert.equal(await page.evaluate(() => document.activeElement.className), 'skip');
  await page.keyboard.press('Enter');
  assert.equal(await page.evaluate(() => document.activeElement.id), 'finder');
});
