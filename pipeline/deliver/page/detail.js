// What a row opens to: how the phrase was made, its contingency table, its scores against the gates
// and its contexts.

class Detail {
  constructor(model, rulings) {
    this.model = model;
    this.rulings = rulings;
  }

  node(kind, row) {
    const set = this.model.sets[kind];
    const merges = [];
    for (let merge = set.merges[row]; merge < set.merges[row + 1]; ++merge) merges.push(merge);
    const surface = kind === 'phrases' ? this.model.data.phrases.surface[row] : '';
    const ruling = this.rulings.of(set.text[row]);
    return el(
        'div', {class: 'detail-box'}, kind === 'phrases' ? this.tally(row) : null,
        surface === '' ? null :
                         el('p', {class: 'small'}, 'Most often written ',
                            el('bdi', {class: 'written'}, surface)),
        ruling === null ? null : this.ruling(ruling),
        kind === 'near' ? this.failure(row, merges[0]) : null,
        el('h4', {}, kind === 'near' ? 'How it would have been made' : 'How it was made'),
        el('ul', {class: 'tree'}, this.branches(merges, kind === 'phrases', new Set())),
        merges.map((merge, i) => this.counts(merge, merges.length > 1, i === 0)),
        this.contexts(set, row));
  }

  tally(row) {
    const {occurrences, inside_longer: inside, documents} = this.model.data.phrases;
    return el(
        'p', {class: 'small'},
        `${count(occurrences[row], 'occurrence')} in the final stream, ` +
            `${whole(inside[row])} inside longer phrases; ${count(documents[row], 'document')}`);
  }

  ruling(ruling) {
    const where = ruling.from === 'job' ? 'in the job' : 'marked here, for the next run';
    return el(
        'p', {},
        el('span', {class: `ruling ruling-${ruling.kind}`},
           ruling.kind === 'none' ? 'ruling dropped' : ruling.kind),
        ` ${where}`, ruling.reason === '' ? null : [': ', el('bdi', {}, ruling.reason)]);
  }

  failure(row, merge) {
    const name = this.model.data.near_misses.failed[row];
    const gate = this.model.passes.get(this.model.data.merges.pass[merge]).accept[name];
    return el(
        'p', {class: 'failure'}, `Turned away by the gate ${measureName(name)}: `,
        el('strong', {}, exact(this.model.quantity(merge, name))), ` is below ${exact(gate)}.`);
  }

  // One list item a merge, with its sides below it as far as they are phrases themselves. A phrase
  // is unfolded once in a tree.
  branches(merges, sewn, seen) {
    const {data} = this.model;
    return merges.map((merge) => {
      const pass = data.merges.pass[merge];
      if (pass === 0) {
        return el(
            'li', {},
            el('p', {class: 'made'}, passBadge(0),
               ` joined by a ruling before the first pass, ${
                   whole(data.merges.joined[merge])} times`));
      }
      const bridge = data.strings[data.merges.bridge[merge]];
      const sides = [data.merges.left[merge], data.merges.right[merge]];
      const plates =
          el('span',
             {class: sewn ? 'weld' : 'weld open', dir: directionOf(this.model.sideText(sides[0]))},
             el('bdi', {class: 'side'}, this.model.sideText(sides[0])),
             el('span', {class: 'bead'}, ' '),
             bridge === '' ?
                 null :
                 [el('bdi', {class: 'side bridge'}, bridge), el('span', {class: 'bead'}, ' ')],
             el('bdi', {class: 'side'}, this.model.sideText(sides[1])));
      const facts = `pass ${pass}, rank ${whole(data.merges.rank[merge])}` +
          (sewn ? `: joined ${whole(data.merges.joined[merge])}, yielded ${
                      whole(data.merges.yielded[merge])}` :
                  '');
      const below = sides.filter((side, i) => side >= 0 && sides.indexOf(side) === i)
                        .map((side) => this.sideBranches(side, pass, seen))
                        .flat();
      return el(
          'li', {}, plates, el('p', {class: 'made'}, passBadge(pass), ` ${facts}`),
          below.length > 0 ? el('ul', {}, below) : null);
    });
  }

  sideBranches(side, pass, seen) {
    const text = this.model.sideText(side);
    if (seen.has(side)) return [el('li', {}, phraseNode(text, true), ' as above')];
    seen.add(side);
    const {merges} = this.model.sets.phrases;
    const earlier = [];
    for (let merge = merges[side]; merge < merges[side + 1]; ++merge) {
      if (this.model.data.merges.pass[merge] < pass) earlier.push(merge);
    }
    return this.branches(earlier, true, seen);
  }

  // The contingency table of a merge and its scores; one of several folds away.
  counts(merge, several, first) {
    const {merges} = this.model.data;
    if (merges.pass[merge] === 0) return null;
    const parts = el('div', {class: 'counts'}, this.table(merge), this.scores(merge));
    if (!several) return el('div', {}, el('h4', {}, 'Counts and scores'), parts);
    return el(
        'details', {open: first},
        el('summary', {},
           `Counts and scores in pass ${merges.pass[merge]}, ` +
               `rank ${whole(merges.rank[merge])}`),
        parts);
  }

  table(merge) {
    const {merges, strings} = this.model.data;
    const [n, left, right, all] = [
      merges.n, merges.left_slots, merges.right_slots, merges.slots
    ].map((column) => column[merge]);
    const expected = (row, column) => (all > 0 ? (row * column) / all : 0);
    const cell = (name, observed, model) =>
        el('td', {}, el('span', {class: 'cell-name'}, name), el('strong', {}, whole(observed)),
           el('span', {class: 'expected'}, `E ${score(model)}`));
    const margin = (value) => el('td', {class: 'margin'}, whole(value));
    const bridge = strings[merges.bridge[merge]];
    const [x, y] =
        [this.model.sideText(merges.left[merge]), this.model.sideText(merges.right[merge])];
    const head = (scope, word, other) => el('th', {scope}, other, el('bdi', {}, word));
    return el(
        'table', {class: 'contingency'},
        el('caption', {},
           bridge === '' ? 'Slots with nothing between the sides' :
                           ['Slots with ', el('bdi', {}, `“${bridge}”`), ' between the sides']),
        el('thead', {},
           el('tr', {}, el('td', {}), head('col', y, 'right: '), head('col', y, 'right: not '),
              el('th', {scope: 'col'}, 'all'))),
        el('tbody', {},
           el('tr', {}, head('row', x, 'left: '), cell('O11', n, merges.expected[merge]),
              cell('O12', left - n, expected(left, all - right)), margin(left)),
           el('tr', {}, head('row', x, 'left: not '),
              cell('O21', right - n, expected(all - left, right)),
              cell('O22', all - left - right + n, expected(all - left, all - right)),
              margin(all - left)),
           el('tr', {}, el('th', {scope: 'row'}, 'all'), margin(right), margin(all - right),
              margin(all))));
  }

  scores(merge) {
    const pass = this.model.passes.get(this.model.data.merges.pass[merge]);
    const names = ['occurrences', 'documents', ...this.model.measures].filter(
        (name) => typeof this.model.quantity(merge, name) === 'number');
    return el(
        'table', {class: 'scores'}, el('caption', {}, `Ranked by ${measureName(pass.rank_by)}`),
        el('thead', {},
           el('tr', {},
              ['Quantity', 'Value', 'Gate'].map((title) => el('th', {scope: 'col'}, title)))),
        el('tbody', {}, names.map((name) => {
          const value = this.model.quantity(merge, name);
          const gate = pass.accept[name];
          const holds = gate === undefined || value >= gate;
          return el(
              'tr', {class: holds ? null : 'fails'}, el('th', {scope: 'row'}, measureName(name)),
              el('td', {class: 'number', title: exact(value)},
                 Number.isInteger(value) ? whole(value) : score(value)),
              el('td', {}, gate === undefined ? '–' : `${holds ? '✓' : '✗'} ≥ ${exact(gate)}`));
        })));
  }

  contexts(set, row) {
    const {contexts, strings} = this.model.data;
    const items = [];
    for (let i = set.contexts[row]; i < set.contexts[row + 1]; ++i) {
      const passage = strings[contexts.passage[i]];
      items.push(
          el('li', {},
             el('p', {dir: 'auto', class: 'context'}, contexts.before[i],
                el('mark', {}, contexts.match[i]), contexts.after[i]),
             el('p', {class: 'small'}, 'document ', el('bdi', {}, strings[contexts.document[i]]),
                passage === '' ? null : [', ', el('bdi', {}, passage)],
                `, byte ${whole(contexts.byte[i])}`)));
    }
    if (items.length === 0) return null;
    return el('div', {}, el('h4', {}, 'In context'), el('ol', {class: 'contexts'}, items));
  }
}
