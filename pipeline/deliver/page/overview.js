// The overview: how much of the corpus is welded, what each pass did, phrases by length.

function showOverview(model) {
  const {data} = model;
  document.title = `${data.job} – Phraseweld report`;
  byId('maker').textContent = data.program;
  byId('job').textContent = data.job;
  byId('lede').textContent = `${count(data.corpus.documents, 'document')} in ` +
      `${count(data.corpus.files, 'file')}, ${bytes(data.corpus.bytes)}. ` +
      `${count(data.phrases.text.length, 'phrase')} in ${
                                 count(passesRun(data), 'pass', 'passes')}, ` +
      `${count(data.near_misses.text.length, 'near miss', 'near misses')} on record.`;
  showShare(model);
  showPasses(data);
  showLengths(data);
  byId('settings')
      .replaceChildren(...data.settings.flatMap(
          ([
            key, value
          ]) => [el('dt', {}, el('code', {}, key)), el('dd', {}, el('bdi', {}, value || '–'))]));
}

const passesRun = (data) => data.passes.filter((pass) => pass.pass > 0).length;

function bytes(value) {
  const units = ['bytes', 'KiB', 'MiB', 'GiB', 'TiB'];
  let unit = 0;
  while (value >= 1024 && unit < units.length - 1) {
    value /= 1024;
    ++unit;
  }
  return `${unit === 0 ? whole(value) : value.toPrecision(3)} ${units[unit]}`;
}

// The class that gives a pass its temper colour; they come round after six.
const temper = (pass) => (pass === 0 ? 'temper-0' : `temper-${((pass - 1) % 6) + 1}`);

const passBadge = (pass) => el('span', {class: `badge ${temper(pass)}`}, String(pass));

function showShare(model) {
  const {data} = model;
  const total = data.passes.length > 0 ? data.passes[0].tokens_in : 0;
  const byPass = model.welded();
  const welded = [...byPass.values()].reduce((sum, words) => sum + words, 0);
  const last = data.passes[data.passes.length - 1];
  const strip = el('div', {class: 'strip', 'aria-hidden': 'true'});
  const legend = el('ul', {class: 'legend'});
  for (const pass of [...byPass.keys()].sort((a, b) => a - b)) {
    const part = el('span', {class: `strip-part ${temper(pass)}`});
    part.style.flexGrow = String(byPass.get(pass));
    strip.append(part);
    legend.append(el(
        'li', {}, passBadge(pass), ' ', pass === 0 ? 'by a ruling' : 'first made in pass ' + pass,
        `: ${percent(byPass.get(pass), total)}`));
  }
  const rest = el('span', {class: 'strip-part strip-rest'});
  rest.style.flexGrow = String(Math.max(0, total - welded));
  strip.append(rest);
  byId('share').replaceChildren(
      el('p', {class: 'figure'}, el('strong', {}, percent(welded, total)),
         ` of the words stand inside phrases: ${whole(welded)} of ${whole(total)}. ` +
             (last ? `As a stream of tokens the corpus is now ${whole(last.tokens_out)} long.` :
                     '')),
      strip, legend);
}

function gatesText(pass) {
  const gates = Object.entries(pass.accept);
  if (pass.pass === 0) return 'by ruling, no gates';
  if (gates.length === 0) return 'no gates';
  return gates.map(([name, least]) => `${measureName(name)} ≥ ${exact(least)}`).join(', ');
}

function showPasses(data) {
  const widest = Math.max(1, ...data.passes.map((pass) => pass.tokens_in));
  const titles =
      ['Pass', 'Accepted', 'Joined', 'Tokens in', 'Tokens out', 'Tokens left and joined away'];
  const rows = data.passes.map((pass) => {
    const kept = el('span', {class: `kept ${temper(pass.pass)}`});
    const gone = el('span', {class: 'gone'});
    kept.style.width = `${(100 * pass.tokens_out) / widest}%`;
    gone.style.width = `${(100 * pass.words_absorbed) / widest}%`;
    return el(
        'tr', {role: 'row'},
        el('th', {role: 'rowheader', scope: 'row'}, passBadge(pass.pass), ' ',
           el('bdi', {}, pass.name), el('span', {class: 'gates'}, gatesText(pass))),
        [pass.accepted, pass.joined, pass.tokens_in, pass.tokens_out].map(
            (value, i) => el(
                'td', {role: 'cell', class: 'number', 'data-title': titles[i + 1]}, whole(value))),
        el('td', {role: 'cell', class: 'flow'},
           el('span', {class: 'flow-bar', 'aria-hidden': 'true'}, kept, gone),
           el('span', {class: 'flow-text'}, `−${whole(pass.words_absorbed)}`)));
  });
  byId('passes').replaceChildren(
      headRow(titles, [], [1, 2, 3, 4]), el('tbody', {role: 'rowgroup'}, rows));
  const uneven = data.passes.filter(
      (pass, i) => pass.tokens_in - pass.words_absorbed !== pass.tokens_out ||
          (i > 0 && data.passes[i - 1].tokens_out !== pass.tokens_in));
  byId('balance').textContent = uneven.length === 0 ?
      'It balances: in every pass, tokens in less tokens joined away are tokens out.' :
      `It does not balance in pass ${uneven.map((pass) => pass.pass).join(', ')}. ` +
          'Check the run with phraseweld verify.';
}

function showLengths(data) {
  const byWords = new Map();
  data.phrases.words.forEach((words, row) => {
    const sum = byWords.get(words) || {phrases: 0, occurrences: 0};
    sum.phrases += 1;
    sum.occurrences += data.phrases.occurrences[row];
    byWords.set(words, sum);
  });
  const most = Math.max(1, ...[...byWords.values()].map((sum) => sum.phrases));
  const rows = [...byWords.keys()].sort((a, b) => a - b).map((words) => {
    const sum = byWords.get(words);
    const bar = el('span', {class: 'length-bar', 'aria-hidden': 'true'});
    bar.style.width = `${(100 * sum.phrases) / most}%`;
    const plates = Array.from({length: Math.min(words, 8)}, () => el('span', {class: 'plate'}));
    return el(
        'tr', {},
        el('th', {scope: 'row'}, el('span', {class: 'length'}, String(words)),
           el('span', {class: 'plates', 'aria-hidden': 'true'}, plates)),
        el('td', {class: 'number'}, bar, whole(sum.phrases)),
        el('td', {class: 'number'}, whole(sum.occurrences)));
  });
  byId('lengths').replaceChildren(
      headRow(['Words', 'Phrases', 'Occurrences'], [], [1, 2]), el('tbody', {}, rows));
}
