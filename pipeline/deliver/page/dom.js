// Building elements and wording numbers. Data reaches the page as text nodes and nothing else.

const byId = (id) => document.getElementById(id);

// An element with attributes and children. A child is a node or a text; null ones are left out. An
// attribute that is a function is a listener, `true` is an attribute without a value, false or null
// is none.
function el(tag, attributes, ...children) {
  return fill(document.createElement(tag), attributes, children);
}

function svg(tag, attributes, ...children) {
  return fill(document.createElementNS('http://www.w3.org/2000/svg', tag), attributes, children);
}

function fill(node, attributes, children) {
  for (const [name, value] of Object.entries(attributes || {})) {
    if (typeof value === 'function')
      node.addEventListener(name, value);
    else if (value === true)
      node.setAttribute(name, '');
    else if (value !== false && value !== null && value !== undefined) {
      node.setAttribute(name, value);
    }
  }
  node.append(...children.flat().filter((child) => child !== null && child !== undefined));
  return node;
}

const wholeFormat = new Intl.NumberFormat('en', {maximumFractionDigits: 0});
const scoreFormat =
    new Intl.NumberFormat('en', {minimumFractionDigits: 2, maximumFractionDigits: 2});
const smallFormat = new Intl.NumberFormat('en', {maximumSignificantDigits: 3});
const exactFormat = new Intl.NumberFormat('en', {maximumFractionDigits: 9});

const whole = (value) => wholeFormat.format(value);
const exact = (value) => exactFormat.format(value);

// A score to read: two decimals, more for those near 0, none for large ones.
function score(value) {
  if (value === null || value === undefined || Number.isNaN(value)) return '–';
  const size = Math.abs(value);
  if (size >= 1000) return whole(value);
  if (size > 0 && size < 0.1) return smallFormat.format(value);
  return scoreFormat.format(value);
}

const percent = (part, of) => (of > 0 ? `${((100 * part) / of).toFixed(1)} %` : '–');

// "1 phrase", "2 phrases"; a plural that is not the singular and an s is given.
function count(value, one, many) {
  return `${whole(value)} ${value === 1 ? one : many || `${one}s`}`;
}

const measureNames = {
  pmi: 'PMI',
  npmi: 'NPMI',
  pmi2: 'PMI²',
  pmi3: 'PMI³',
  pmi_floor: 'PMI floor',
  g2: 'G²',
  chi2: 'χ²',
  t: 't',
  dice: 'Dice',
  dp_forward: 'ΔP forward',
  dp_backward: 'ΔP backward',
  burst: 'burst',
  occurrences: 'occurrences',
  documents: 'documents',
};
const measureName = (key) => measureNames[key] || key;

// A phrase with its words sewn together (accepted) or lying apart (near miss). Copied or read out
// it is the plain phrase; its direction never leaks into the text around it.
function phraseNode(text, sewn) {
  const words = text.split(' ');
  const node = el('bdi', {class: sewn ? 'phrase sewn' : 'phrase apart'});
  words.forEach((word, index) => {
    if (index > 0) node.append(el('span', {class: 'stitch'}, ' '));
    node.append(el('span', {class: 'word'}, word));
  });
  return node;
}

// The head of a table whose rows the style may lay out otherwise, so that roles are spelt out.
// Titles at the places `silent` are for screen readers alone, those at `numbers` stand to the
// right.
function headRow(titles, silent, numbers) {
  return el(
      'thead', {role: 'rowgroup'},
      el('tr', {role: 'row'},
         titles.map(
             (title, i) =>
                 el('th', {
                   role: 'columnheader',
                   scope: 'col',
                   class: numbers && numbers.includes(i) ? 'number' : null
                 },
                    silent && silent.includes(i) ? el('span', {class: 'hidden-text'}, title) :
                                                   title))));
}

// "rtl" for a text whose first letter is of a right-to-left script, else "ltr"; for rows of boxes,
// where the browser's own dir="auto" looks past isolated text.
function directionOf(text) {
  const letter = text.match(/\p{L}/u);
  return letter && /[\u0590-\u08ff\ufb1d-\ufdff\ufe70-\ufefc]/.test(letter[0]) ? 'rtl' : 'ltr';
}

// Runs `work` once, after the events at hand.
function soon(work) {
  let waiting = false;
  return () => {
    if (waiting) return;
    waiting = true;
    requestAnimationFrame(() => {
      waiting = false;
      work();
    });
  };
}

// Browsers refuse storage to some pages, by an exception or by having none.
function storage() {
  try {
    const probe = 'phraseweld:probe';
    window.localStorage.setItem(probe, '1');
    window.localStorage.removeItem(probe);
    return window.localStorage;
  } catch {
    return null;
  }
}
