// A table of many rows of which only those in sight exist. It is a real table for screen readers:
// roles are spelt out because its rows are laid out as grids, and every row tells its place among
// all. Tab reaches one row; the arrow keys go on from there.

const kSpare = 8;  // rows kept ready above and below the sight

class RowTable {
  // columns: [{key, title, hint, sort: (row) => value or null, cell(row) -> nodes, first}], the
  // first holding the phrase; detail(row) -> node; name: what a row is, for labels.
  constructor(scroller, {columns, detail, label, sorted}) {
    Object.assign(this, {scroller, columns, detail, sorted});
    this.view = new Int32Array(0);  // rows in their order
    this.open = new Map();          // row -> height of its detail in pixels
    this.nodes = new Map();         // row -> tr
    this.active = 0;                // place in the view that Tab reaches
    this.limit = 0;                 // rows to draw at once for printing, 0: those in sight
    this.head = el('tr', {role: 'row', 'aria-rowindex': 1});
    this.body = el('tbody', {role: 'rowgroup'});
    this.table =
        el('table', {role: 'table', 'aria-labelledby': label, 'aria-colcount': columns.length},
           el('thead', {role: 'rowgroup'}, this.head), this.body);
    this.none = el('p', {class: 'none', hidden: true}, 'Nothing passes the filters.');
    scroller.append(this.table, this.none);
    this.redraw = soon(() => this.draw());
    scroller.addEventListener('scroll', this.redraw, {passive: true});
    new ResizeObserver(this.redraw).observe(scroller);
    this.heights = new ResizeObserver((entries) => this.measure(entries));
    this.body.addEventListener('keydown', (event) => this.key(event));
    this.body.addEventListener('focusin', (event) => {
      const tr = event.target.closest('tr[data-at]');
      if (tr) this.activate(Number(tr.dataset.at));
    });
  }

  showHead(sort) {
    this.head.replaceChildren(...this.columns.map((column, i) => {
      const sorted = sort.key === column.key;
      const mark =
          el('span', {class: 'sort-mark', 'aria-hidden': 'true'},
             sorted ? (sort.down ? '↓' : '↑') : '');
      return el(
          'th', {
            role: 'columnheader',
            scope: 'col',
            'aria-colindex': i + 1,
            class: `c-${column.key}`,
            'aria-sort': sorted ? (sort.down ? 'descending' : 'ascending') : null,
          },
          column.sort ?
              el('button',
                 {type: 'button', click: () => this.sorted(column.key), title: column.hint},
                 column.title, mark) :
              el('span', {class: 'hidden-text'}, column.title));
    }));
  }

  // Shows these rows in this order.
  show(view, sort) {
    const focused = this.head.contains(document.activeElement) ?
        [...this.head.children].findIndex((cell) => cell.contains(document.activeElement)) :
        -1;
    this.view = view;
    this.active = 0;
    this.showHead(sort);
    if (focused >= 0) this.head.children[focused].querySelector('button').focus();
    this.table.setAttribute('aria-rowcount', view.length + 1);
    this.none.hidden = view.length > 0;
    this.scroller.scrollTop = 0;
    this.refresh();
  }

  // Draws the rows anew, for what they show has changed. The focus stays where it was.
  refresh() {
    const tr = this.body.contains(document.activeElement) &&
        document.activeElement.closest('tr[data-row]');
    const role = tr && document.activeElement.dataset.role;
    this.nodes.forEach((node) => this.heights.unobserve(node));
    this.nodes.clear();
    this.body.replaceChildren();
    this.rowHeight = 0;
    this.draw();
    const again = tr && this.nodes.get(Number(tr.dataset.row));
    const target = again && again.querySelector(`[data-role="${role}"]`);
    if (target) target.focus({preventScroll: true});
  }

  // Places in the view of the open rows, ascending, with the pixels of all details before each.
  openPlaces() {
    const list = [];
    let sum = 0;
    if (this.open.size > 0) {
      this.view.forEach((row, at) => {
        if (!this.open.has(row)) return;
        list.push({at, before: sum});
        sum += this.open.get(row);
      });
    }
    return {list, sum};
  }

  top(at, places) {
    let extra = 0;
    for (const place of places.list) {
      if (place.at >= at) break;
      extra = place.before + this.open.get(this.view[place.at]);
    }
    return at * this.rowHeight + extra;
  }

  // The last row that starts at or above `y`.
  atHeight(y, places) {
    let [low, high] = [0, Math.max(0, this.view.length - 1)];
    while (low < high) {
      const middle = (low + high + 1) >> 1;
      if (this.top(middle, places) <= y)
        low = middle;
      else
        high = middle - 1;
    }
    return low;
  }

  draw() {
    if (!this.rowHeight) {
      this.rowHeight =
          parseFloat(getComputedStyle(this.scroller).getPropertyValue('--row-height')) || 36;
    }
    const height =
        parseFloat(getComputedStyle(this.scroller).getPropertyValue('--row-height')) || 36;
    if (height !== this.rowHeight) {
      this.refresh();
      return;
    }
    const places = this.openPlaces();
    const size = this.view.length;
    const y = this.scroller.scrollTop;
    let first = Math.max(0, this.atHeight(y, places) - kSpare);
    let last = Math.min(size, this.atHeight(y + this.scroller.clientHeight, places) + 1 + kSpare);
    if (this.limit > 0) [first, last] = [0, Math.min(size, this.limit)];
    const wanted = new Set(this.view.subarray(first, last));
    for (const [row, node] of this.nodes) {
      if (wanted.has(row) || node.contains(document.activeElement)) continue;
      this.heights.unobserve(node);
      node.remove();
      this.nodes.delete(row);
    }
    let before = null;
    for (let at = first; at < last; ++at) {
      const row = this.view[at];
      let node = this.nodes.get(row);
      if (!node) {
        node = this.rowNode(row, at);
        this.nodes.set(row, node);
        this.heights.observe(node);
      }
      const place = before ? before.nextSibling : this.body.firstChild;
      if (place !== node) this.body.insertBefore(node, place);
      before = node;
    }
    // A row that holds the focus stays in the table when it is out of sight, but takes no room.
    for (const [row, node] of this.nodes) node.classList.toggle('out', !wanted.has(row));
    const printing = this.limit > 0;
    const end = size * this.rowHeight + places.sum;
    this.body.style.paddingTop = printing ? '0' : `${this.top(first, places)}px`;
    this.body.style.paddingBottom =
        printing ? '0' : `${Math.max(0, end - this.bottom(last, places))}px`;
    this.tabStops(first, last);
  }

  bottom(last, places) {
    return last >= this.view.length ? this.view.length * this.rowHeight + places.sum :
                                      this.top(last, places);
  }

  rowNode(row, at) {
    const cells = this.columns.map(
        (column, i) =>
            el(i === 0 ? 'th' : 'td', {
              role: i === 0 ? 'rowheader' : 'cell',
              scope: i === 0 ? 'row' : null,
              'aria-colindex': i + 1,
              class: `c-${column.key}`,
              'data-title': column.title,
            },
               column.cell(row)));
    const node =
        el('tr', {
          role: 'row',
          'aria-rowindex': at + 2,
          'data-at': at,
          'data-row': row,
          class: at % 2 ? 'odd' : null
        },
           cells);
    if (this.open.has(row)) this.unfold(node, row);
    return node;
  }

  unfold(node, row) {
    node.classList.add('open');
    node.append(
        el('td', {role: 'cell', class: 'detail', 'aria-label': 'Details'}, this.detail(row)));
    const button = node.querySelector('[data-role="open"]');
    if (button) button.setAttribute('aria-expanded', 'true');
  }

  measure(entries) {
    let changed = false;
    for (const {target} of entries) {
      const row = Number(target.dataset.row);
      if (!this.open.has(row) || target.classList.contains('out')) continue;
      const detail = target.querySelector('.detail');
      const height = detail ? detail.offsetHeight : 0;
      if (height > 0 && height !== this.open.get(row)) {
        this.open.set(row, height);
        changed = true;
      }
    }
    if (changed) this.redraw();
  }

  toggle(row) {
    const node = this.nodes.get(row);
    if (this.open.has(row)) {
      this.open.delete(row);
      node.classList.remove('open');
      node.querySelector('.detail').remove();
      node.querySelector('[data-role="open"]').setAttribute('aria-expanded', 'false');
    } else {
      this.open.set(row, 0);
      this.unfold(node, row);
      this.open.set(row, node.querySelector('.detail').offsetHeight);
    }
    this.redraw();
  }

  // Scrolls to a row, opens it and puts the focus on it; false if the view has no such row.
  reveal(row) {
    const at = this.view.indexOf(row);
    if (at < 0) return false;
    this.goTo(at);
    if (!this.open.has(row)) this.toggle(row);
    this.scroller.scrollIntoView({block: 'nearest'});
    return true;
  }

  goTo(at) {
    const places = this.openPlaces();
    const y = this.top(at, places);
    const room = this.scroller.clientHeight - this.head.offsetHeight - this.rowHeight;
    if (y < this.scroller.scrollTop)
      this.scroller.scrollTop = y;
    else if (y > this.scroller.scrollTop + room)
      this.scroller.scrollTop = y - room / 2;
    this.active = at;
    this.draw();
    const node = this.nodes.get(this.view[at]);
    node.querySelector('[data-role="open"]').focus({preventScroll: true});
  }

  // Puts the focus on a part of a row, if the row is drawn.
  focusOn(row, role) {
    const node = this.nodes.get(row);
    if (node) node.querySelector(`[data-role="${role}"]`).focus({preventScroll: true});
  }

  activate(at) {
    if (at === this.active) return;
    this.active = at;
    this.redraw();
  }

  tabStops(first, last) {
    const reached = this.active >= first && this.active < last ? this.active : first;
    for (const node of this.nodes.values()) {
      const here = Number(node.dataset.at) === reached;
      node.querySelectorAll('[data-role]').forEach((part) => {
        part.tabIndex = here ? 0 : -1;
      });
    }
  }

  key(event) {
    if (!event.target.dataset.role) return;
    const page = Math.max(1, Math.floor(this.scroller.clientHeight / this.rowHeight) - 2);
    const steps =
        {ArrowDown: 1, ArrowUp: -1, PageDown: page, PageUp: -page, Home: -Infinity, End: Infinity};
    const step = steps[event.key];
    if (step === undefined || this.view.length === 0) return;
    event.preventDefault();
    this.goTo(Math.min(Math.max(this.active + step, 0), this.view.length - 1));
  }

  print(rows) {
    this.limit = rows;
    this.draw();
  }
}
