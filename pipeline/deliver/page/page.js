// The report page: puts the parts together and keeps filters, plot and tables in step.
//
// The data block (<script type="application/json" id="data">), written by deliver/page.cc:
//   program, job    texts; hash: XXH3-128 of all the rest, in hexadecimal
//   corpus          {files, bytes, documents}
//   settings        [[key, value], ...] texts to show
//   passes          [{pass, name, tokens_in, types_in, slots, slot_types, rank_by,
//                   accept: {quantity: least}, accepted, joined, words_absorbed, tokens_out}, ...];
//                   pass 0 is the rulings'
//   rulings         [{always, phrase (as written), form (as phrases' texts are), reason}, ...]
// and, a column an array so that names stand once:
//   phrases         {text, surface ("" where it is the text), words, pass, occurrences,
//                   inside_longer, documents, merges, contexts}
//   near_misses     {text, words, failed (a quantity's name), contexts}
//   merges          {pass, rank, left, bridge, right, n, left_slots, right_slots, slots, documents,
//                   expected, joined, yielded, scores: {measure: [number or null]}}
//   contexts        {document, passage, byte, before, match, after}
//   strings         [text, ...]
// `phrases.merges` and the two `contexts` columns count how many rows of `merges` and `contexts`
// belong to the row, one phrase after another; then each near miss has one merge, and its contexts
// follow. `left` and `right` are a phrase's row, or -1 - an index of `strings`; `bridge`,
// `document` and `passage` index `strings`. In pass 0 only `joined` means anything.

const kPrintedRows = 60;

class Page {
  constructor(data) {
    this.keep = storage();
    this.model = new Model(data);
    this.rulings = new Rulings(this.model, this.keep, () => this.rulingsChanged());
    this.panel = new RulingPanel(this.rulings);
    this.detail = new Detail(this.model, this.rulings);
    const ranked = data.passes.find((pass) => pass.pass > 0 && pass.accepted > 0) ||
        data.passes.find((pass) => pass.pass > 0);
    this.measure = ranked ? ranked.rank_by : this.model.measures[0];
    this.filter = {text: '', pass: null, words: null, documents: 0, ruled: ''};
    this.rectangle = null;
    this.sort = {phrases: {key: 'all', down: true}, near: {key: 'occurrences', down: true}};
    showOverview(this.model);
    this.makeFilters();
    this.makeTables();
    this.plot = new Plot(byId('plot'), this.model, {
      brush: (rectangle) => this.setRectangle(rectangle),
      open: (merge) => this.openMerge(merge),
    });
    this.makeBrush();
    this.makeTools();
    this.update = soon(() => this.apply());
    this.showPlot();
    this.apply();
    this.panel.show();
  }

  makeFilters() {
    const {data} = this.model;
    const option = (value, text) => el('option', {value}, text);
    byId('filter-pass')
        .append(
            option('', 'all'),
            ...data.passes.map((pass) => option(pass.pass, `${pass.pass} ${pass.name}`)));
    const lengths =
        [...new Set([...data.phrases.words, ...data.near_misses.words])].sort((a, b) => a - b);
    byId('filter-words')
        .append(option('', 'all'), ...lengths.map((words) => option(words, `${words} words`)));
    byId('filter-measure')
        .append(...this.model.measures.map((name) => option(name, measureName(name))));
    const form = byId('filters');
    form.addEventListener('submit', (event) => event.preventDefault());
    form.addEventListener('input', () => this.readFilters());
    form.addEventListener('reset', () => setTimeout(() => {
                                     this.rectangle = null;
                                     this.readFilters();
                                   }));
    form.reset();
    byId('filter-measure').value = this.measure;
  }

  readFilters() {
    const number = (id) => (byId(id).value === '' ? null : Number(byId(id).value));
    const pass = number('filter-pass');
    const moved = pass !== this.filter.pass;
    this.filter = {
      text: byId('filter-text').value,
      pass,
      words: number('filter-words'),
      documents: number('filter-documents') || 0,
      ruled: byId('filter-ruled').value
    };
    const ranked = this.model.passes.get(pass);
    if (moved && ranked && this.model.measures.includes(ranked.rank_by)) {
      byId('filter-measure').value = ranked.rank_by;
    }
    const measure = byId('filter-measure').value;
    if (moved || measure !== this.measure) {
      this.measure = measure;
      this.rectangle = null;
      this.showPlot();
    }
    this.update();
  }

  makeTables() {
    const {data, sets} = this.model;
    const {phrases} = data;
    const phraseCell = (kind) => (row) => [el(
        'button', {
          type: 'button',
          class: 'open-row',
          'data-role': 'open',
          'aria-expanded': 'false',
          click: () => this.tables[kind].toggle(row)
        },
        phraseNode(sets[kind].text[row], kind === 'phrases'))];
    const ruleCell = (kind, usual) => (row) => {
      const text = sets[kind].text[row];
      const now = this.rulings.of(text);
      const shown = now === null || now.kind === 'none' ? usual : now.kind;
      return [el(
          'button', {
            type: 'button',
            'data-role': 'rule',
            class: now === null ? 'rule' : `rule ruling ruling-${now.kind}`,
            'aria-label': now === null ? `Rule on ${text}: ${usual}` :
                                         `Ruling on ${text}: ${now.kind}; change`,
            click: () => this.panel.open(text, usual, () => this.tables[kind].focusOn(row, 'rule'))
          },
          now !== null && now.kind === 'none' ? 'dropped' : shown)];
    };
    const plain = (kind, column) =>
        ({sort: (row) => sets[kind][column][row], cell: (row) => [whole(sets[kind][column][row])]});
    const scoreColumn = (kind) => ({
      key: 'score',
      title: 'Score',
      sort: (row) => this.model.scores(kind, this.measure)[row],
      cell: (row) => [score(this.model.scores(kind, this.measure)[row])]
    });
    this.columns = {
      phrases: [
        {key: 'phrase', title: 'Phrase', sort: null, cell: phraseCell('phrases')},
        {key: 'words', title: 'Words', ...plain('phrases', 'words')},
        {
          key: 'pass',
          title: 'Pass',
          sort: (row) => phrases.pass[row],
          cell: (row) => [passBadge(phrases.pass[row])]
        },
        {
          key: 'all',
          title: 'Made',
          hint: 'tokens ever made of it: in the final stream and inside longer phrases',
          sort: (row) => phrases.occurrences[row] + phrases.inside_longer[row],
          cell: (row) => [whole(phrases.occurrences[row] + phrases.inside_longer[row])]
        },
        {
          key: 'inside',
          title: 'In longer',
          hint: 'of these, inside longer phrases',
          sort: (row) => phrases.inside_longer[row],
          cell: (row) => [whole(phrases.inside_longer[row])]
        },
        {
          key: 'documents',
          title: 'Docs',
          hint: 'documents in which it was made',
          ...plain('phrases', 'documents')
        },
        scoreColumn('phrases'),
        {key: 'rule', title: 'Ruling', cell: ruleCell('phrases', 'never')},
      ],
      near: [
        {key: 'phrase', title: 'Phrase', cell: phraseCell('near')},
        {
          key: 'pass',
          title: 'Pass',
          sort: (row) => sets.near.pass[row],
          cell: (row) => [passBadge(sets.near.pass[row])]
        },
        {
          key: 'occurrences',
          title: 'Seen',
          hint: 'occurrences in its pass',
          ...plain('near', 'occurrences')
        },
        {
          key: 'failed',
          title: 'Failed gate',
          sort: (row) => this.closeness(row),
          cell: (row) => this.failed(row)
        },
        {key: 'rule', title: 'Ruling', cell: ruleCell('near', 'always')},
      ],
    };
    this.tables = {};
    for (const kind of ['phrases', 'near']) {
      const texts = sets[kind].text;
      this.columns[kind][0].sort = (row) => texts[row];
      this.tables[kind] = new RowTable(byId(kind), {
        columns: this.columns[kind],
        label: `${kind}-title`,
        detail: (row) => this.detail.node(kind, row),
        sorted: (key) => this.sortBy(kind, key),
      });
    }
  }

  // How much of its gate a near miss reached.
  closeness(row) {
    const merge = this.model.sets.near.merges[row];
    const name = this.model.data.near_misses.failed[row];
    const gate = this.model.passes.get(this.model.sets.near.pass[row]).accept[name];
    return {value: this.model.quantity(merge, name), gate, name};
  }

  failed(row) {
    const {value, gate, name} = this.closeness(row);
    const reach = el('span', {class: 'reach-part'});
    reach.style.width = `${Math.max(0, Math.min(1, gate > 0 ? value / gate : 0)) * 100}%`;
    return [
      el('span', {class: 'failed-text'},
         `${measureName(name)} ${score(value).replace(/\.00$/, '')} < ${exact(gate)}`),
      el('span', {class: 'reach', 'aria-hidden': 'true'}, reach)
    ];
  }

  sortBy(kind, key) {
    const now = this.sort[kind];
    this.sort[kind] = {key, down: now.key === key ? !now.down : key !== 'phrase'};
    this.apply();
  }

  sorted(kind, rows) {
    const {key, down} = this.sort[kind];
    const column = this.columns[kind].find((entry) => entry.key === key);
    const values = new Map();
    for (const row of rows) {
      const value = column.sort(row);
      values.set(row, key === 'failed' ? value.value / value.gate : value);
    }
    const sign = down ? -1 : 1;
    const nothing = (value) => (typeof value === 'number' && Number.isNaN(value) ? 1 : 0);
    return Int32Array.from(rows).sort((a, b) => {
      const [x, y] = [values.get(a), values.get(b)];
      const empty = nothing(x) - nothing(y);  // rows without a score stand last either way
      if (empty !== 0) return empty;
      return x < y ? -sign : x > y ? sign : a - b;
    });
  }

  // Puts the filters to work: plot, tables, counts.
  apply() {
    const {sets, data} = this.model;
    const isRuled = (text) => this.rulings.isRuled(text);
    const keep = {
      phrases: this.model.matches('phrases', this.filter, isRuled),
      near: this.model.matches('near', this.filter, isRuled)
    };
    const kept = (merge) => {
      const {kind, row} = this.model.ownerOf(merge);
      return keep[kind][row] === 1;
    };
    this.plot.filter(kept, this.rectangle);
    const inside = {
      phrases: new Uint8Array(sets.phrases.size),
      near: new Uint8Array(sets.near.size)
    };
    if (this.rectangle) {
      const {x, y} = this.rectangle;
      const scores = data.merges.scores[this.measure];
      for (const merge of this.plot.merges) {
        const n = data.merges.n[merge];
        if (n < x[0] || n > x[1] || scores[merge] < y[0] || scores[merge] > y[1]) continue;
        const {kind, row} = this.model.ownerOf(merge);
        inside[kind][row] = 1;
      }
    }
    const shown = {};
    for (const kind of ['phrases', 'near']) {
      const rows = [];
      for (let row = 0; row < sets[kind].size; ++row) {
        if (keep[kind][row] && (!this.rectangle || inside[kind][row])) rows.push(row);
      }
      shown[kind] = rows.length;
      this.columns[kind].find((column) => column.key === 'score' || column.key === 'failed').title =
          kind === 'phrases' ? measureName(this.measure) : 'Failed gate';
      this.tables[kind].show(this.sorted(kind, rows), this.sort[kind]);
    }
    byId('found').textContent =
        `${whole(shown.phrases)} of ${count(sets.phrases.size, 'phrase')}, ` +
        `${whole(shown.near)} of ${count(sets.near.size, 'near miss', 'near misses')}` +
        (this.rectangle ? ', inside the rectangle' : '');
    byId('print-note').textContent =
        `Printed: the first ${whole(Math.min(kPrintedRows, shown.phrases))} of ` +
        `${count(shown.phrases, 'phrase')} and ${whole(Math.min(kPrintedRows, shown.near))} of ` +
        `${count(shown.near, 'near miss', 'near misses')} that pass the filters.`;
    this.showBrush();
  }

  showPlot() {
    const pass = this.model.passes.get(this.filter.pass);
    this.plot.show(this.filter.pass, this.measure);
    byId('plot-caption').textContent = `Occurrences against ${measureName(this.measure)}, ` +
        (pass ? `pass ${pass.pass} (${pass.name})` : 'all passes') +
        `: ${count(this.plot.merges.length, 'point')}`;
    byId('brush-y-name').textContent = measureName(this.measure);
  }

  setRectangle(rectangle) {
    this.rectangle = rectangle;
    this.update();
  }

  makeBrush() {
    const steps = 400;
    const read = () => {
      const part = (id) => Number(byId(id).value) / steps;
      const ends = (first, second, scale) => {
        const [low, high] = [part(first), part(second)].sort((a, b) => a - b);
        return [
          low === 0 ? -Infinity : scale.value(low), high === 1 ? Infinity : scale.value(high)
        ];
      };
      const x = ends('brush-x-low', 'brush-x-high', this.plot.x);
      const y = ends('brush-y-low', 'brush-y-high', this.plot.y);
      this.setRectangle([...x, ...y].every((end) => !Number.isFinite(end)) ? null : {x, y});
    };
    byId('brush').addEventListener('input', read);
    byId('brush-clear').addEventListener('click', () => this.setRectangle(null));
    this.brushSteps = steps;
  }

  // Sets the range inputs to the rectangle, unless the reader has one in hand.
  showBrush() {
    for (const axis of ['x', 'y']) {
      const scale = this.plot[axis];
      const limits = this.plot.limits[axis];
      const ends = this.rectangle ? this.rectangle[axis] : [-Infinity, Infinity];
      ['low', 'high'].forEach((end, i) => {
        const input = byId(`brush-${axis}-${end}`);
        const finite = Number.isFinite(ends[i]);
        const at = finite ? Math.round(scale.at(ends[i]) * this.brushSteps) : i * this.brushSteps;
        if (document.activeElement !== input) input.value = at;
        const value = finite ? ends[i] : limits[i];
        const text =
            axis === 'x' ? whole(i === 0 ? Math.ceil(value) : Math.floor(value)) : score(value);
        byId(`brush-${axis}-${end}-text`).textContent = text;
        input.setAttribute('aria-valuetext', text);
      });
    }
    byId('brush-clear').disabled = !this.rectangle;
  }

  // Opens the row of a point; filters that hide it give way.
  openMerge(merge) {
    const {kind, row} = this.model.ownerOf(merge);
    if (this.tables[kind].reveal(row)) return;
    byId('filters').reset();
    this.rectangle = null;
    this.readFilters();
    this.apply();
    this.tables[kind].reveal(row);
  }

  rulingsChanged() {
    this.panel.show();
    if (this.filter.ruled !== '')
      this.apply();
    else
      for (const table of Object.values(this.tables)) table.refresh();
  }

  makeTools() {
    const schemes = {'': 'system', light: 'light', dark: 'dark'};
    const key = 'phraseweld:scheme';
    const show = (scheme) => {
      if (scheme === '')
        delete document.documentElement.dataset.scheme;
      else
        document.documentElement.dataset.scheme = scheme;
      byId('theme').textContent = `Colours: ${schemes[scheme]}`;
      this.plot.redraw();
    };
    let scheme = (this.keep && this.keep.getItem(key)) || '';
    if (!(scheme in schemes)) scheme = '';
    show(scheme);
    byId('theme').addEventListener('click', () => {
      const names = Object.keys(schemes);
      scheme = names[(names.indexOf(scheme) + 1) % names.length];
      show(scheme);
      if (this.keep) this.keep.setItem(key, scheme);
    });
    window.matchMedia('(prefers-color-scheme: dark)').addEventListener('change', this.plot.redraw);
    byId('print').addEventListener('click', () => window.print());
    const printing = (rows) => {
      for (const table of Object.values(this.tables)) table.print(rows);
      this.plot.draw();
    };
    window.matchMedia('print').addEventListener(
        'change', (event) => printing(event.matches ? kPrintedRows : 0));
    window.addEventListener('beforeprint', () => printing(kPrintedRows));
    window.addEventListener('afterprint', () => printing(0));
  }
}

// Lets the browser paint the head of the page before the data is read.
requestAnimationFrame(() => setTimeout(() => {
                        new Page(JSON.parse(byId('data').textContent));
                      }));
