// The dialog in which a ruling is made, the list of rulings, and the bar that sums up the marks.

class RulingPanel {
  constructor(rulings) {
    this.rulings = rulings;
    this.dialog = byId('ruling-dialog');
    this.dialog.addEventListener('close', () => this.after());
    this.form = null;  // the phrase in the dialog; null: typed by the reader
    byId('ruling-form').addEventListener('submit', (event) => this.set(event));
    byId('ruling-form').addEventListener('input', () => this.showEffect());
    byId('ruling-cancel').addEventListener('click', () => this.dialog.close());
    byId('rule-other')
        .addEventListener(
            'click', () => this.open(null, 'always', () => byId('rule-other').focus()));
    byId('save-rulings').addEventListener('click', () => this.save());
    byId('bar-save').addEventListener('click', () => this.save());
    byId('clear-marks').addEventListener('click', () => this.rulings.clear());
  }

  // Opens the dialog on a phrase (null: one to be typed), with its ruling or else `kind` chosen.
  // `after` puts the focus back once it is closed, for what opened it may have been drawn anew.
  open(form, kind, after) {
    this.after = after;
    const now = form === null ? null : this.rulings.of(form);
    this.form = form;
    byId('ruling-phrase').replaceChildren(...(form === null ? [] : [phraseNode(form, true)]));
    byId('ruling-other-label').hidden = form !== null;
    byId('ruling-other').required = form === null;
    byId('ruling-other').value = '';
    byId(`kind-${now ? now.kind : kind}`).checked = true;
    byId('ruling-reason').value = now ? now.reason : '';
    this.showEffect();
    this.dialog.showModal();
    (form === null ? byId('ruling-other') : byId('ruling-reason')).focus();
  }

  chosen() {
    const form =
        this.form === null ? byId('ruling-other').value.trim().replace(/\s+/g, ' ') : this.form;
    const kind = ['never', 'always', 'none'].find((name) => byId(`kind-${name}`).checked);
    return {form, kind};
  }

  showEffect() {
    const {form, kind} = this.chosen();
    const effect = this.rulings.effect(form, kind);
    byId('ruling-effect').textContent = form === '' || kind === 'none' ? '' : effectWords(effect);
  }

  set(event) {
    const {form, kind} = this.chosen();
    if (form === '') {
      event.preventDefault();
      return;
    }
    this.rulings.set(form, kind, kind === 'none' ? '' : byId('ruling-reason').value.trim());
  }

  save() {
    const file = new Blob([this.rulings.toYaml()], {type: 'application/yaml'});
    const link = el('a', {href: URL.createObjectURL(file), download: 'rulings.yaml'});
    link.click();
    setTimeout(() => URL.revokeObjectURL(link.href), 1000);
  }

  show() {
    this.showList();
    this.showBar();
    byId('rulings-text').textContent = this.rulings.toYaml();
    byId('clear-marks').disabled = this.rulings.marks.size === 0;
    byId('storage-note').hidden = this.rulings.keep !== null && this.rulings.stored !== false;
  }

  showList() {
    const back = (form) => {
      const change = [...byId('ruling-list').querySelectorAll('button')].find(
          (button) => button.dataset.form === form);
      (change || byId('rule-other')).focus();
    };
    const forms = [...new Set([...this.rulings.byForm.keys(), ...this.rulings.marks.keys()])];
    if (forms.length === 0) {
      byId('ruling-list')
          .replaceChildren(
              el('p', {}, 'No rulings yet. Use the button at the end of a row to make one.'));
      return;
    }
    const rows = forms.map((form) => {
      const now = this.rulings.of(form);
      const job = this.rulings.byForm.get(form);
      const from = now.from === 'job' ? 'in the job' : job ? 'changed here' : 'marked here';
      const known = this.rulings.effect(form, now.kind);
      const cells = [
        el('span', {class: `ruling ruling-${now.kind}`},
           now.kind === 'none' ? 'dropped' : now.kind),
        phraseNode(form, now.kind === 'always'),
        el('bdi', {}, now.reason || '–'),
        from,
        now.from === 'mark' && now.kind !== 'none' ? effectWords(known) : '',
        el('button', {
          type: 'button',
          'data-form': form,
          'aria-label': `Change the ruling on ${form}`,
          click: () => this.open(form, now.kind, () => back(form))
        },
           'Change'),
      ];
      return el(
          'tr', {role: 'row'},
          cells.map(
              (cell, i) =>
                  (i === 1 ? el('th', {role: 'rowheader', scope: 'row'}, cell) :
                             el('td', {role: 'cell'}, cell))));
    });
    byId('ruling-list')
        .replaceChildren(
            el('table', {class: 'rulings', role: 'table', 'aria-label': 'Rulings for the next run'},
               headRow(['Ruling', 'Phrase', 'Reason', 'Where', 'At the least', 'Change'], [5]),
               el('tbody', {role: 'rowgroup'}, rows)));
  }

  showBar() {
    const sum = this.rulings.effects();
    const marks = this.rulings.marks.size;
    byId('bar').hidden = marks === 0;
    document.body.classList.toggle('with-bar', marks > 0);
    if (marks === 0) return;
    const parts = [];
    if (sum.never > 0) {
      parts.push(
          `${whole(sum.never)} never: ${count(sum.apart, 'join')} undone, ` +
          `${count(sum.freed, 'token')} more before others join in their place`);
    }
    if (sum.always > 0) {
      parts.push(
          `${whole(sum.always)} always: at most ${count(sum.joins, 'join')} more, ` +
          `up to ${count(sum.taken, 'token')} fewer`);
    }
    if (sum.none > 0) parts.push(`${count(sum.none, 'ruling')} of the job dropped`);
    if (sum.unknown > 0) parts.push(`${whole(sum.unknown)} this run cannot tell of`);
    byId('bar-text')
        .replaceChildren(
            el('strong', {}, `${count(marks, 'mark')}, not yet in the job. `), parts.join(' · '));
  }
}
