// The comparison's page is whole without this; it adds a filter over the lists of phrases, sorting
// by a click on a column's title, and the choice between light and dark.

const lists = Array.from(document.querySelectorAll('table.phrases-list'));

function addFilter() {
  const filter = document.getElementById('filter-text');
  const found = document.getElementById('found');
  filter.closest('form').hidden = false;
  filter.closest('form').addEventListener('submit', (event) => event.preventDefault());
  filter.addEventListener('input', () => {
    const wanted = filter.value.trim().toLowerCase();
    const told = [];
    for (const list of lists) {
      let shown = 0;
      for (const row of list.tBodies[0].rows) {
        row.hidden = !row.cells[0].textContent.toLowerCase().includes(wanted);
        if (!row.hidden) shown += 1;
      }
      told.push(`${shown.toLocaleString('en')} ${list.dataset.name}`);
    }
    found.textContent = wanted ? told.join(', ') : '';
  });
}

// Numbers sort by the exact value that their cell carries, texts by the reader's collation.
function sortBy(list, column, descending) {
  const collator = new Intl.Collator();
  const body = list.tBodies[0];
  const keys = new Map();
  for (const row of body.rows) {
    const cell = row.cells[column];
    const value = cell.dataset.value;
    keys.set(row, value === undefined ? cell.textContent : Number(value));
  }
  const rows = Array.from(body.rows).sort((a, b) => {
    const [x, y] = [keys.get(a), keys.get(b)];
    const order = typeof x === 'number' ? x - y : collator.compare(x, y);
    return descending ? -order : order;
  });
  body.append(...rows);
}

function addSorting(list) {
  const titles = Array.from(list.tHead.rows[0].cells);
  titles.forEach((title, column) => {
    const button = document.createElement('button');
    button.type = 'button';
    button.textContent = title.textContent;
    title.replaceChildren(button);
    button.addEventListener('click', () => {
      const numbers = title.classList.contains('number');
      const before = title.getAttribute('aria-sort');
      const descending = before ? before === 'ascending' : numbers;
      for (const other of titles) other.removeAttribute('aria-sort');
      title.setAttribute('aria-sort', descending ? 'descending' : 'ascending');
      sortBy(list, column, descending);
    });
  });
}

function addThemes() {
  const button = document.getElementById('theme');
  const schemes = ['', 'light', 'dark'];
  const names = ['as the system', 'light', 'dark'];
  let at = 0;
  button.hidden = false;
  button.addEventListener('click', () => {
    at = (at + 1) % schemes.length;
    document.documentElement.dataset.scheme = schemes[at];
    button.textContent = `Light or dark: ${names[at]}`;
  });
}

addFilter();
lists.forEach(addSorting);
addThemes();
