// Occurrences (log) against a measure, a point a merge. Points are drawn on a canvas, for there may
// be tens of thousands; axes, gates and the rectangle lie over it as SVG.

const kMargin = {
  left: 54,
  right: 16,
  top: 18,
  bottom: 38
};
const kMostInPixel = 4;  // dots drawn in one pixel; more would not show
const kReach = 12;       // pixels from the pointer within which a point answers

class Scale {
  // Maps [low, high] to [0, 1]: "log", "linear", or "signed" (asinh, for measures that run to
  // thousands on both sides of 0).
  constructor(kind, low, high) {
    const bends = {
      log: [Math.log, Math.exp],
      linear: [Number, Number],
      signed: [Math.asinh, Math.sinh]
    };
    [this.bend, this.unbend] = bends[kind];
    this.kind = kind;
    this.low = this.bend(low);
    this.width = this.bend(high) - this.low || 1;
  }
  at(value) {
    return (this.bend(value) - this.low) / this.width;
  }
  value(at) {
    return this.unbend(this.low + at * this.width);
  }
  ticks() {
    const [low, high] = [this.value(0), this.value(1)];
    const list = [];
    if (this.kind === 'linear') {
      const rough = (high - low) / 5;
      const power = 10 ** Math.floor(Math.log10(rough));
      const step = power * [1, 2, 5, 10].find((factor) => factor * power >= rough);
      for (let i = Math.ceil(low / step); i * step <= high; ++i) list.push(i * step);
      return list;
    }
    const add = (value) => {
      if (value >= low && value <= high) list.push(value);
    };
    const factors = high / Math.max(low, 1) < 60 ? [1, 2, 5] : [1];
    for (let power = 1; power <= 1e15; power *= 10)
      factors.forEach((factor) => add(factor * power));
    if (this.kind === 'signed')
      for (let power = 1; power <= 1e15; power *= 10) add(-power);
    if (this.kind === 'signed') add(0);
    return list;
  }
}

class Plot {
  // on: {brush(rectangle or null), open(merge), say(text)}; a rectangle is {x: [low, high], y:
  // [..]}.
  constructor(host, model, on) {
    Object.assign(
        this,
        {host, model, on, merges: [], active: -1, rectangle: null, drag: null, keep: () => true});
    this.canvas = el('canvas', {'aria-hidden': 'true'});
    this.over = svg('svg', {'aria-hidden': 'true'});
    this.tag = el('div', {class: 'tag', hidden: true});
    this.live = el('p', {class: 'hidden-text', 'aria-live': 'polite'});
    host.append(this.canvas, this.over, this.tag, this.live);
    // Canvas needs colours as values; these elements carry them in both schemes.
    this.probes = Object.fromEntries(['accepted', 'near'].map((name) => {
      const probe = el('span', {class: `probe-${name}`, hidden: true});
      host.append(probe);
      return [name, probe];
    }));
    this.redraw = soon(() => this.draw());
    new ResizeObserver(this.redraw).observe(host);
    host.addEventListener('pointerdown', (event) => this.press(event));
    host.addEventListener('pointermove', (event) => this.move(event));
    host.addEventListener('pointerup', (event) => this.release(event));
    host.addEventListener('pointercancel', () => this.stopDrag());
    host.addEventListener('pointerleave', () => this.drag || this.point(-1));
    host.addEventListener('keydown', (event) => this.key(event));
    host.addEventListener('blur', () => this.point(-1));
  }

  // Shows the merges of `pass` (null: all); `gates` are the passes whose gates are drawn.
  show(pass, measure) {
    this.merges = this.model.points(pass, measure);
    this.measure = measure;
    this.active = -1;
    const {n} = this.model.data.merges;
    const y = this.model.data.merges.scores[measure] || [];
    const gates = [...this.model.passes.values()].filter(
        (entry) => entry.pass > 0 && (pass === null || entry.pass === pass));
    this.gates = {x: gateLines(gates, 'occurrences'), y: gateLines(gates, measure)};
    let [left, right, low, high] = [Infinity, 1, Infinity, -Infinity];
    for (const merge of this.merges) {
      left = Math.min(left, n[merge]);
      right = Math.max(right, n[merge]);
      low = Math.min(low, y[merge]);
      high = Math.max(high, y[merge]);
    }
    for (const gate of this.merges.length > 0 ? this.gates.y.keys() : []) {
      low = Math.min(low, gate);
      high = Math.max(high, gate);
    }
    for (const gate of this.merges.length > 0 ? this.gates.x.keys() : []) {
      left = Math.min(left, Math.max(1, gate));
    }
    if (!(low <= high)) [left, low, high] = [1, 0, 1];
    const kind = ['g2', 'chi2', 't'].includes(measure) ? 'signed' : 'linear';
    const pad =
        kind === 'linear' ? (high - low) * 0.04 || 1 : (Math.abs(high) + Math.abs(low)) * 0.1;
    this.x = new Scale('log', Math.max(0.8, left * 0.85), Math.max(right * 1.15, left * 2));
    this.y = new Scale(kind, low - pad, high + pad);
    this.limits = {x: [left, right], y: [low, high]};
    this.order = null;
    this.redraw();
  }

  // Marks which points stand out: keep(merge) tells; the others are drawn faintly.
  filter(keep, rectangle) {
    this.keep = keep;
    this.rectangle = rectangle;
    this.order = null;
    this.redraw();
  }

  place(merge) {
    const {n, scores} = this.model.data.merges;
    const width = this.width - kMargin.left - kMargin.right;
    const height = this.height - kMargin.top - kMargin.bottom;
    return [
      kMargin.left + this.x.at(n[merge]) * width,
      kMargin.top + (1 - this.y.at(scores[this.measure][merge])) * height
    ];
  }

  // The square of the grid, kReach wide, in which points are looked for.
  cell(x, y) {
    return Math.floor(y / kReach) * 4096 + Math.floor(x / kReach);
  }

  draw() {
    this.width = this.host.clientWidth;
    this.height = this.host.clientHeight;
    if (this.width === 0 || !this.x) return;
    const ratio = window.devicePixelRatio || 1;
    this.canvas.width = this.width * ratio;
    this.canvas.height = this.height * ratio;
    this.over.setAttribute('viewBox', `0 0 ${this.width} ${this.height}`);
    const pen = this.canvas.getContext('2d');
    pen.scale(ratio, ratio);
    const near = this.model.sets.phrases.merges[this.model.sets.phrases.size];
    const crowd = Math.min(1, Math.max(0.25, 2500 / Math.max(1, this.merges.length)));
    const colours = Object.fromEntries(
        Object.entries(this.probes).map(([name, probe]) => [name, getComputedStyle(probe).color]));
    this.grid = new Map();
    const drawn = new Uint8Array(Math.ceil(this.width) * Math.ceil(this.height));
    pen.lineWidth = 1.4;
    for (const strong of [false, true]) {
      drawn.fill(0);
      for (let i = 0; i < this.merges.length; ++i) {
        const merge = this.merges[i];
        if (this.keep(merge) !== strong) continue;
        const [x, y] = this.place(merge);
        const cell = this.cell(x, y);
        if (!this.grid.has(cell)) this.grid.set(cell, []);
        this.grid.get(cell).push([x, y, i]);
        pen.globalAlpha = strong ? 0.35 + 0.5 * crowd : 0.13;
        pen.beginPath();
        if (merge < near) {
          const pixel = Math.floor(y) * Math.ceil(this.width) + Math.floor(x);
          if (drawn[pixel] === kMostInPixel) continue;
          drawn[pixel] += 1;
          pen.fillStyle = colours.accepted;
          pen.arc(x, y, strong ? 3 : 2.4, 0, 2 * Math.PI);
          pen.fill();
        } else {
          pen.strokeStyle = colours.near;
          pen.moveTo(x, y - 4);
          pen.lineTo(x + 4, y);
          pen.lineTo(x, y + 4);
          pen.lineTo(x - 4, y);
          pen.closePath();
          pen.stroke();
        }
      }
    }
    this.drawOver();
  }

  drawOver() {
    const [left, right] = [kMargin.left, this.width - kMargin.right];
    const [top, bottom] = [kMargin.top, this.height - kMargin.bottom];
    const xAt = (value) => left + this.x.at(value) * (right - left);
    const yAt = (value) => top + (1 - this.y.at(value)) * (bottom - top);
    const parts = [svg('path', {class: 'axis', d: `M${left} ${top}V${bottom}H${right}`})];
    for (const tick of this.x.ticks()) {
      parts.push(
          svg('path', {class: 'grid', d: `M${xAt(tick)} ${top}V${bottom}`}),
          svg('text', {x: xAt(tick), y: bottom + 15, 'text-anchor': 'middle'}, whole(tick)));
    }
    for (const tick of this.y.ticks()) {
      parts.push(
          svg('path', {class: 'grid', d: `M${left} ${yAt(tick)}H${right}`}),
          svg('text', {x: left - 7, y: yAt(tick) + 4, 'text-anchor': 'end'},
              exact(+tick.toPrecision(6))));
    }
    parts.push(
        svg('text', {class: 'name', x: right, y: bottom + 32, 'text-anchor': 'end'},
            'occurrences →'),
        svg('text', {class: 'name', x: 6, y: top - 6}, `${measureName(this.measure)} ↑`));
    const names = [];
    // Names of gates that lie close stand at different heights.
    let step = 0;
    for (const [gate, passes] of this.gates.x) {
      if (this.x.at(gate) < 0) continue;
      const height = bottom - 6 - 15 * step++;
      parts.push(svg('path', {class: 'gate', d: `M${xAt(gate)} ${top}V${bottom}`}));
      names.push(svg(
          'text', {class: 'gate-name', x: xAt(gate) + 4, y: height}, `≥ ${exact(gate)} ${passes}`));
    }
    const highest = Math.max(...this.gates.y.keys());
    for (const [gate, passes] of this.gates.y) {
      const height = yAt(gate) + (gate === highest ? -6 : 14);
      parts.push(svg('path', {class: 'gate', d: `M${left} ${yAt(gate)}H${right}`}));
      names.push(
          svg('text', {class: 'gate-name', x: right - 2, y: height, 'text-anchor': 'end'},
              `≥ ${exact(gate)} ${passes}`));
    }
    parts.push(...names);
    if (this.merges.length === 0) {
      parts.push(
          svg('text', {x: (left + right) / 2, y: (top + bottom) / 2, 'text-anchor': 'middle'},
              'No merge here has this measure.'));
    }
    const box = this.drag && this.drag.moved ? this.drag.box : this.rectangle && {
      x: xAt(Math.max(this.rectangle.x[0], this.x.value(0))),
      y: yAt(Math.min(this.rectangle.y[1], this.y.value(1))),
      right: xAt(Math.min(this.rectangle.x[1], this.x.value(1))),
      bottom: yAt(Math.max(this.rectangle.y[0], this.y.value(0))),
    };
    if (box) {
      parts.push(svg('rect', {
        class: 'brushed',
        x: box.x,
        y: box.y,
        rx: 3,
        width: Math.max(0, box.right - box.x),
        height: Math.max(0, box.bottom - box.y)
      }));
    }
    if (this.active >= 0) {
      const [x, y] = this.place(this.merges[this.active]);
      parts.push(svg('circle', {class: 'ring', cx: x, cy: y, r: 8}));
    }
    this.over.replaceChildren(...parts);
  }

  // Names the i-th point (-1: none) beside it.
  point(i, aloud) {
    if (i === this.active) return;
    this.active = i;
    this.tag.hidden = i < 0;
    if (i >= 0) {
      const merge = this.merges[i];
      const {kind, row} = this.model.ownerOf(merge);
      const {n, documents, pass} = this.model.data.merges;
      const value = this.model.data.merges.scores[this.measure][merge];
      const facts = `${count(n[merge], 'occurrence')} in ${count(documents[merge], 'document')}, ` +
          `${measureName(this.measure)} ${score(value)}, pass ${pass[merge]}` +
          (kind === 'near' ? `, near miss: ${this.model.data.near_misses.failed[row]}` : '');
      const text = this.model.sets[kind].text[row];
      this.tag.replaceChildren(phraseNode(text, kind === 'phrases'), el('span', {}, facts));
      const [x, y] = this.place(merge);
      const room = this.tag.getBoundingClientRect();
      this.tag.style.left = `${Math.max(0, Math.min(x + 12, this.width - room.width - 4))}px`;
      this.tag.style.top = `${y > room.height + 20 ? y - room.height - 12 : y + 14}px`;
      if (aloud) this.live.textContent = `${text}: ${facts}`;
    }
    this.drawOver();
  }

  nearest(x, y) {
    let [best, distance] = [-1, kReach * kReach];
    for (let column = -1; column <= 1; ++column) {
      for (let row = -1; row <= 1; ++row) {
        const cell = this.cell(x + column * kReach, y + row * kReach);
        for (const [px, py, i] of (this.grid && this.grid.get(cell)) || []) {
          const d = (px - x) ** 2 + (py - y) ** 2;
          if (d < distance) [best, distance] = [i, d];
        }
      }
    }
    return best;
  }

  at(event) {
    const box = this.host.getBoundingClientRect();
    const limit = (value, low, high) => Math.min(Math.max(value, low), high);
    return [
      limit(event.clientX - box.left, kMargin.left, this.width - kMargin.right),
      limit(event.clientY - box.top, kMargin.top, this.height - kMargin.bottom)
    ];
  }

  press(event) {
    if (event.button !== 0) return;
    const [x, y] = this.at(event);
    this.drag = {x, y, moved: false, box: null};
    this.host.setPointerCapture(event.pointerId);
  }

  move(event) {
    const [x, y] = this.at(event);
    if (!this.drag) {
      this.point(this.nearest(x, y));
      return;
    }
    const {drag} = this;
    drag.moved = drag.moved || Math.hypot(x - drag.x, y - drag.y) > 5;
    drag.box = {
      x: Math.min(x, drag.x),
      right: Math.max(x, drag.x),
      y: Math.min(y, drag.y),
      bottom: Math.max(y, drag.y)
    };
    if (drag.moved) this.drawOver();
  }

  release(event) {
    const {drag} = this;
    if (!drag) return;
    this.drag = null;
    if (!drag.moved) {
      const i = this.nearest(...this.at(event));
      if (i >= 0)
        this.on.open(this.merges[i]);
      else if (this.rectangle)
        this.on.brush(null);
      return;
    }
    const xValue = (x) =>
        this.x.value((x - kMargin.left) / (this.width - kMargin.left - kMargin.right));
    const yValue = (y) =>
        this.y.value(1 - (y - kMargin.top) / (this.height - kMargin.top - kMargin.bottom));
    const {box} = drag;
    this.on.brush({x: [xValue(box.x), xValue(box.right)], y: [yValue(box.bottom), yValue(box.y)]});
  }

  stopDrag() {
    this.drag = null;
    this.drawOver();
  }

  // Points that stand out, by occurrences and by score, for the arrow keys.
  walk() {
    if (this.order) return this.order;
    const {n, scores} = this.model.data.merges;
    const values = scores[this.measure];
    const places = this.merges.map((_, i) => i).filter((i) => this.keep(this.merges[i]));
    const by = (first, second) => [...places].sort(
        (a, b) => first[this.merges[a]] - first[this.merges[b]] ||
            second[this.merges[a]] - second[this.merges[b]] || a - b);
    this.order = {x: by(n, values), y: by(values, n)};
    return this.order;
  }

  key(event) {
    const steps =
        {ArrowLeft: ['x', -1], ArrowRight: ['x', 1], ArrowDown: ['y', -1], ArrowUp: ['y', 1]};
    if (steps[event.key]) {
      const [along, step] = steps[event.key];
      const order = this.walk()[along];
      if (order.length === 0) return;
      const now = order.indexOf(this.active);
      const next = now < 0 ? (step > 0 ? 0 : order.length - 1) :
                             Math.min(Math.max(now + step, 0), order.length - 1);
      this.point(order[next], true);
    } else if (event.key === 'Enter' && this.active >= 0) {
      this.on.open(this.merges[this.active]);
    } else if (event.key === 'Escape' && this.rectangle) {
      this.on.brush(null);
    } else {
      return;
    }
    event.preventDefault();
  }
}

// Distinct values of a gate among the passes, each with the passes that have it in words.
function gateLines(passes, quantity) {
  const lines = new Map();
  for (const pass of passes) {
    const gate = pass.accept[quantity];
    if (gate !== undefined) lines.set(gate, [...(lines.get(gate) || []), pass.pass]);
  }
  for (const [gate, list] of lines) {
    lines.set(gate, list.length === passes.length ? '' : `pass ${list.join(', ')}`);
  }
  return lines;
}
