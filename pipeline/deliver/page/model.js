// The report's data as the page works with it: the columns of the data block with the places of
// their parts worked out, and which rows pass the filters.

class Model {
  constructor(data) {
    this.data = data;
    this.measures = Object.keys(data.merges.scores);
    this.passes = new Map(data.passes.map((pass) => [pass.pass, pass]));
    const {phrases, near_misses: near, merges} = data;
    this.sets = {
      phrases: {
        kind: 'phrases',
        size: phrases.text.length,
        text: phrases.text,
        words: phrases.words,
        merges: starts(phrases.merges, 0),
        contexts: starts(phrases.contexts, 0),
      },
    };
    const made = this.sets.phrases.merges[phrases.text.length];
    const shown = this.sets.phrases.contexts[phrases.text.length];
    this.sets.near = {
      kind: 'near',
      size: near.text.length,
      text: near.text,
      words: near.words,
      merges: starts(near.text.map(() => 1), made),
      contexts: starts(near.contexts, shown),
    };
    this.sets.near.pass = near.text.map((_, row) => merges.pass[made + row]);
    this.sets.phrases.pass = phrases.pass;
    this.sets.phrases.occurrences = phrases.occurrences;
    this.sets.phrases.documents = phrases.documents;
    this.sets.near.occurrences = near.text.map((_, row) => merges.n[made + row]);
    this.sets.near.documents = near.text.map((_, row) => merges.documents[made + row]);
    this.owner = new Int32Array(merges.pass.length);  // of a merge: a row, near misses behind
    for (const set of [this.sets.phrases, this.sets.near]) {
      const shift = set.kind === 'near' ? this.sets.phrases.size : 0;
      for (let row = 0; row < set.size; ++row) {
        this.owner.fill(shift + row, set.merges[row], set.merges[row + 1]);
      }
    }
    this.rowOf = {};
    for (const kind of ['phrases', 'near']) {
      this.rowOf[kind] = new Map();
      for (let row = this.sets[kind].size - 1; row >= 0; --row) {
        this.rowOf[kind].set(this.sets[kind].text[row], row);
      }
    }
    this.scoreColumns = new Map();
    this.searchTexts = {};
  }

  // The set and row that a merge belongs to.
  ownerOf(merge) {
    const owner = this.owner[merge];
    const phrases = this.sets.phrases.size;
    return owner < phrases ? {kind: 'phrases', row: owner} : {kind: 'near', row: owner - phrases};
  }

  sideText(side) {
    return side >= 0 ? this.data.phrases.text[side] : this.data.strings[-1 - side];
  }

  // A column of scores for the table: of a row, that of its first merge that has one; NaN for none.
  scores(kind, measure) {
    const key = `${kind} ${measure}`;
    if (!this.scoreColumns.has(key)) {
      const set = this.sets[kind];
      const values = this.data.merges.scores[measure] || [];
      const column = new Float64Array(set.size).fill(NaN);
      for (let row = 0; row < set.size; ++row) {
        for (let merge = set.merges[row]; merge < set.merges[row + 1]; ++merge) {
          if (typeof values[merge] === 'number') {
            column[row] = values[merge];
            break;
          }
        }
      }
      this.scoreColumns.set(key, column);
    }
    return this.scoreColumns.get(key);
  }

  // A quantity of a merge: one of the two counts, or a score.
  quantity(merge, name) {
    if (name === 'occurrences') return this.data.merges.n[merge];
    if (name === 'documents') return this.data.merges.documents[merge];
    return (this.data.merges.scores[name] || [])[merge];
  }

  // The merges that the plot shows: those of `pass` (all for null) that have the measure.
  points(pass, measure) {
    const {merges} = this.data;
    const values = merges.scores[measure] || [];
    const list = [];
    for (let merge = 0; merge < merges.pass.length; ++merge) {
      if (merges.pass[merge] === 0 || (pass !== null && merges.pass[merge] !== pass)) continue;
      if (typeof values[merge] === 'number' && merges.n[merge] > 0) list.push(merge);
    }
    return list;
  }

  // Marks the rows of `kind` that pass `filter` but for its rectangle.
  // filter: {text, pass, words, documents, ruled}; isRuled(text) tells of a ruling.
  matches(kind, filter, isRuled) {
    const set = this.sets[kind];
    const parts = fold(filter.text).split(/\s+/).filter((part) => part !== '');
    if (parts.length > 0 && !this.searchTexts[kind]) this.searchTexts[kind] = set.text.map(fold);
    const texts = this.searchTexts[kind];
    const passes = this.data.merges.pass;
    const keep = new Uint8Array(set.size);
    for (let row = 0; row < set.size; ++row) {
      if (filter.words !== null && set.words[row] !== filter.words) continue;
      if (set.documents[row] < filter.documents) continue;
      if (filter.pass !== null) {
        let merge = set.merges[row];
        while (merge < set.merges[row + 1] && passes[merge] !== filter.pass) ++merge;
        if (merge === set.merges[row + 1]) continue;
      }
      if (parts.length > 0 && !parts.every((part) => texts[row].includes(part))) continue;
      if (filter.ruled !== '' && isRuled(set.text[row]) !== (filter.ruled === 'ruled')) continue;
      keep[row] = 1;
    }
    return keep;
  }

  // Words of the corpus inside phrases of the final stream, by the pass that first made the phrase.
  welded() {
    const {phrases} = this.data;
    const byPass = new Map();
    phrases.text.forEach((_, row) => {
      const words = phrases.occurrences[row] * phrases.words[row];
      byPass.set(phrases.pass[row], (byPass.get(phrases.pass[row]) || 0) + words);
    });
    return byPass;
  }
}

// Sums of the counts before each, and of all.
function starts(counts, first) {
  const sums = [first];
  for (const size of counts) sums.push(sums[sums.length - 1] + size);
  return sums;
}

const fold = (text) => text.normalize('NFKC').toLowerCase();
