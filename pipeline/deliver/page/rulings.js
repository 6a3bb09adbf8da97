// Rulings: those of the job, and the reader's marks on top of them.

class Rulings {
  // `model` gives the job's rulings and the counts; `keep` is a Storage or null; `changed` is
  // called after every change.
  constructor(model, keep, changed) {
    this.model = model;
    this.keep = keep;
    this.changed = changed;
    this.key = `phraseweld:rulings:${model.data.job}:${model.data.hash}`;
    this.job = model.data.rulings;
    this.byForm = new Map(this.job.map((ruling) => [ruling.form, ruling]));
    this.marks = new Map();  // form -> {kind: "always" | "never" | "none", reason}
    this.load();
  }

  load() {
    try {
      for (const [form, kind, reason] of JSON.parse(this.keep.getItem(this.key)) || []) {
        if (['always', 'never', 'none'].includes(kind)) {
          this.marks.set(String(form), {kind, reason: String(reason)});
        }
      }
    } catch {
      this.marks.clear();  // nothing kept, or not by this page
    }
  }

  store() {
    try {
      const rows = [...this.marks].map(([form, mark]) => [form, mark.kind, mark.reason]);
      if (rows.length > 0)
        this.keep.setItem(this.key, JSON.stringify(rows));
      else
        this.keep.removeItem(this.key);
      this.stored = true;
    } catch {
      this.stored = false;  // refused or full; the marks stay on the page
    }
    this.changed();
  }

  // What holds for a phrase in the next run: {kind, reason, from: "job" | "mark"}, or null.
  of(form) {
    const mark = this.marks.get(form);
    if (mark) return {...mark, from: 'mark'};
    const ruling = this.byForm.get(form);
    if (!ruling) return null;
    return {kind: ruling.always ? 'always' : 'never', reason: ruling.reason, from: 'job'};
  }

  isRuled(form) {
    const ruling = this.of(form);
    return ruling !== null && ruling.kind !== 'none';
  }

  set(form, kind, reason) {
    const ruling = this.byForm.get(form);
    const same = ruling ?
        kind === (ruling.always ? 'always' : 'never') && reason === ruling.reason :
        kind === 'none';
    if (same)
      this.marks.delete(form);
    else
      this.marks.set(form, {kind, reason});
    this.store();
  }

  clear() {
    this.marks.clear();
    this.store();
  }

  // The rulings of the next run, the job's in their order, then new ones in the order of the marks.
  next() {
    const list = [];
    for (const ruling of this.job) {
      const now = this.of(ruling.form);
      if (now.kind !== 'none') {
        list.push({kind: now.kind, phrase: ruling.phrase, reason: now.reason});
      }
    }
    for (const [form, mark] of this.marks) {
      if (!this.byForm.has(form) && mark.kind !== 'none') {
        list.push({kind: mark.kind, phrase: form, reason: mark.reason});
      }
    }
    return list;
  }

  toYaml() {
    const lines = this.next().map(({kind, phrase, reason}) => {
      const why = reason === '' ? '' : `, reason: ${yamlQuoted(reason)}`;
      return `- {${kind}: ${yamlQuoted(phrase)}${why}}\n`;
    });
    return lines.length > 0 ? lines.join('') : '[]\n';
  }

  // What one ruling changes, as far as this run's counts tell: {apart: joins undone, freed: words
  // that stand alone again} or {joins: at most so many, taken: words joined away}, or null where
  // this run knows nothing of the phrase or nothing changes.
  effect(form, kind) {
    const {merges} = this.model.data;
    const phrase = this.model.rowOf.phrases.get(form);
    if (kind === 'never' && phrase !== undefined) {
      const {merges: places, words} = this.model.sets.phrases;
      const effect = {apart: 0, freed: 0};
      for (let merge = places[phrase]; merge < places[phrase + 1]; ++merge) {
        const bridge = this.model.data.strings[merges.bridge[merge]];
        const taken = merges.pass[merge] === 0 ? words[phrase] - 1 :
                                                 1 + (bridge === '' ? 0 : bridge.split(' ').length);
        effect.apart += merges.joined[merge];
        effect.freed += merges.joined[merge] * taken;
      }
      return effect;
    }
    const near = this.model.rowOf.near.get(form);
    if (kind === 'always' && near !== undefined && phrase === undefined) {
      const {words, occurrences} = this.model.sets.near;
      return {joins: occurrences[near], taken: occurrences[near] * (words[near] - 1)};
    }
    return null;
  }

  // The effects of all marks together, and how many of them this run cannot tell of.
  effects() {
    const sum = {never: 0, always: 0, none: 0, apart: 0, freed: 0, joins: 0, taken: 0, unknown: 0};
    for (const [form, mark] of this.marks) {
      sum[mark.kind] += 1;
      const effect = this.effect(form, mark.kind);
      if (effect === null)
        sum.unknown += 1;
      else
        for (const [name, value] of Object.entries(effect)) sum[name] += value;
    }
    return sum;
  }
}

// YAML 1.2.2, section 5.7 and 7.3.1: a double-quoted scalar on one line. What is not printable, or
// would turn the line's direction or break it, is written as an escape.
function yamlQuoted(text) {
  let out = '';
  for (const character of text.toWellFormed ? text.toWellFormed() : text) {
    const point = character.codePointAt(0);
    if (character === '"' || character === '\\')
      out += `\\${character}`;
    else if (character === '\n')
      out += '\\n';
    else if (character === '\t')
      out += '\\t';
    else if (character === '\r')
      out += '\\r';
    else if (point < 0x20 || (point >= 0x7f && point < 0xa0)) {
      out += `\\x${point.toString(16).padStart(2, '0')}`;
    } else if (/[\u2028\u2029\u200b-\u200f\u202a-\u202e\u2060-\u206f\ufeff\ufffe\uffff]/.test(
                   character)) {
      out += `\\u${point.toString(16).padStart(4, '0')}`;
    } else
      out += character;
  }
  return `"${out}"`;
}

// An effect in words.
function effectWords(effect) {
  if (effect === null) return 'This run\'s counts do not tell what that changes.';
  if (effect.apart !== undefined) {
    return `Undoes ${count(effect.apart, 'join')}: ${count(effect.freed, 'token')} more, ` +
        'before anything else joins in its place.';
  }
  return `Joins at most ${whole(effect.joins)} times: up to ${count(effect.taken, 'token')} fewer.`;
}
