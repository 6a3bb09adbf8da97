// Rulings: made, saved, kept; and texts that mean harm.

import assert from 'node:assert/strict';
import yaml from 'yaml';

import {data, found, merges, rowOf, rule, saved, small, test} from './harness.mjs';

await test('marks are made, summed up, saved, kept over a reload and dropped', async (page) => {
  const phrase = data.phrases.text.findIndex(
      (_, i) => data.phrases.words[i] === 4 && data.phrases.pass[i] === 1);
  const reason = 'too common: "of"\tand \\ so\u202e \u0085';
  let row = await rowOf(page, data.phrases.text[phrase]);
  await rule(page, row.locator('[data-role="rule"]'), 'never', reason);
  assert.equal(await page.evaluate(() => document.activeElement.dataset.role), 'rule');
  await page.fill('#filter-text', data.near_misses.text[0]);
  row = page.locator('#near tr[data-row="0"]');
  await rule(page, row.locator('[data-role="rule"]'), 'always', '');
  const joined =
      data.merges.joined[merges.findIndex((m) => m.kind === 'phrases' && m.row === phrase)];
  const n = merges.find((m) => m.kind === 'near' && m.row === 0).n;
  const bar = await page.textContent('#bar-text');
  assert.ok(
      bar.includes(`1 never: ${joined.toLocaleString('en')} joins undone, ${
          (joined * 3).toLocaleString('en')} tokens more`),
      bar);
  assert.ok(bar.includes(`1 always: at most ${n} joins more, up to ${n} tokens fewer`), bar);
  const expected = [
    {always: 'Old Miller\'s Knot', reason: 'the name of a knot'},
    {never: 'and so "on"'},
    {never: data.phrases.text[phrase], reason: reason.trim()},
    {always: data.near_misses.text[0]},
  ];
  const text = await saved(page);
  assert.deepEqual(yaml.parse(text), expected);
  assert.equal(
      text.split('\n')[2],
      `- {never: "${
          data.phrases.text[phrase]}", reason: "too common: \\"of\\"\\tand \\\\ so\\u202e \\x85"}`);
  await page.reload();
  await page.waitForSelector('#phrases tr[data-row]');
  assert.equal(await saved(page), text);
  await page.selectOption('#filter-ruled', 'ruled');
  await found(
      page, 2, data.near_misses.text.filter((other) => other === data.near_misses.text[0]).length);
  await page.click('#clear-marks');
  assert.ok(await page.locator('#bar').isHidden());
  await found(page, 1, 0);
});

await test('rulings of the job are shown, can be changed and dropped', async (page) => {
  assert.deepEqual(
      await page.locator('#ruling-list tbody tr')
          .evaluateAll(
              (rows) => rows.map(
                  (row) => [...row.children]
                               .slice(0, 4)
                               .map((cell) => cell.textContent)
                               .join('|'))),
      ['always|old miller\'s knot|the name of a knot|in the job', 'never|and so on|–|in the job']);
  await page.locator('#ruling-list tbody tr').nth(0).locator('button').click();
  await page.check('#kind-none');
  await page.click('#ruling-set');
  await page.locator('#ruling-list tbody tr').nth(1).locator('button').click();
  await page.fill('#ruling-reason', 'filler');
  await page.keyboard.press('Enter');
  assert.equal(await saved(page), '- {never: "and so \\"on\\"", reason: "filler"}\n');
  await page.click('#rule-other');
  await page.fill('#ruling-other', '  left  bank lamp ');
  await page.fill('#ruling-reason', 'a lamp');
  await page.click('#ruling-set');
  assert.deepEqual(
      yaml.parse(await saved(page)),
      [{never: 'and so "on"', reason: 'filler'}, {always: 'left bank lamp', reason: 'a lamp'}]);
  assert.ok((await page.textContent('#bar-text')).includes('1 ruling of the job dropped'));
});

await test('marks work where storage is refused', async (page) => {
  assert.ok(await page.locator('#storage-note').isVisible());
  await rule(page, page.locator('#phrases [data-role="rule"]').first(), 'never', 'seen enough');
  assert.match(await saved(page), /reason: "seen enough"/);
}, {
  before: (page) => page.addInitScript(() => Object.defineProperty(window, 'localStorage', {
    get() {
      throw new DOMException('refused', 'SecurityError');
    }
  }))
});

await test('hostile texts stay texts', async (page) => {
  for (const part of ['<script>', '"quoted"', 'רוח', 'gnirts', '🌬', '<!--']) {
    const text = data.phrases.text.find((phrase) => phrase.includes(part));
    assert.ok(text, part);
    const row = await rowOf(page, part);
    await page.waitForFunction(
        (want) => document.querySelector('#phrases .open-row').textContent === want, text);
    assert.equal(await row.locator('.open-row bdi *:not(span)').count(), 0);
    await row.locator('.open-row').click();
    assert.equal(
        await row.locator('.weld').getAttribute('dir'), part === 'רוח' ? 'rtl' : 'ltr', part);
    assert.ok((await row.locator('.detail').textContent()).includes(text.split(' ')[0]));
    await rule(page, row.locator('[data-role="rule"]'), 'never', `</script> ${part}`);
  }
  const rulings =
      yaml.parse(await saved(page)).filter((entry) => String(entry.reason).startsWith('</script>'));
  assert.deepEqual(rulings.map((entry) => entry.never), [
    '<script>', '"quoted"', 'רוח', 'gnirts', '🌬', '<!--'
  ].map((part) => data.phrases.text.find((phrase) => phrase.includes(part))));
  assert.equal(await page.evaluate(() => window.broken), undefined);
  assert.equal(await page.locator('#phrases img, #phrases script, #phrases style').count(), 0);
  const cut = data.phrases.text.findIndex((phrase) => phrase.startsWith('<!--'));
  assert.equal(data.phrases.surface[cut], 'cut \ufffd\ufffd bytes \ufffd');
  assert.ok(!small.html.split('id="data">')[1].split('</script>')[0].includes('<'));
});

await test('the policy lets no other script, style or address in', async (page) => {
  const blocked = await page.evaluate(async () => {
    const events = [];
    document.addEventListener(
        'securitypolicyviolation', (event) => events.push(event.effectiveDirective));
    document.body.append(
        Object.assign(document.createElement('script'), {textContent: 'window.broken = 1'}));
    document.head.append(
        Object.assign(document.createElement('style'), {textContent: 'body { display: none }'}));
    document.body.append(
        Object.assign(document.createElement('img'), {src: 'https://example.invalid/a.png'}));
    await fetch('https://example.invalid/').catch(() => 0);
    await new Promise((done) => setTimeout(done, 100));
    return events.sort();
  });
  assert.deepEqual(blocked, ['connect-src', 'img-src', 'script-src-elem', 'style-src-elem']);
  assert.equal(await page.evaluate(() => window.broken), undefined);
}, {complains: true});
