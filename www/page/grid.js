/**
 * The table of a data cell: only the rows in sight are in the document, and only they are asked from the engine. The grid
 * itself has the keyboard and names the active value; one value at a time is edited in place.
 */

import { freshId, h, setText } from './dom.js';
import { moved } from './grid-keys.js';
import { bodyHeight, scrollToRow, visibleRows } from './scroll.js';
import { looksLikeTable } from './tables.js';

/** @typedef {import('./messages.js').Rows} Rows */
/** @typedef {Rows & { revision: number }} Window */

const ROW = 28;
const MOST_ROWS_IN_SIGHT = 12;
/** Rows asked for at once: enough for several screens, so that scrolling seldom waits. */
const WINDOW = 120;
const WIDEST = 30;

/**
 * @typedef {object} GridActions
 * @property {(from: number, count: number) => void} ask
 * @property {(row: number, column: number, value: string) => void} setValue
 * @property {(text: string) => void} setTable
 * @property {(text: string) => void} copy
 */

/**
 * @param {string} label
 * @param {GridActions} actions
 */
export function createGrid(label, actions) {
  const head = h('div', { class: 'grid-head', role: 'row', 'aria-rowindex': 1 });
  const body = h('div', { class: 'grid-body', role: 'rowgroup' });
  const element = h('div', { class: 'grid', role: 'grid', tabIndex: 0, 'aria-label': label }, h('div', { role: 'rowgroup', class: 'grid-headgroup' }, head), body);
  const id = freshId('value');
  /** @type {Window|undefined} */
  let window;
  let revision = -1;
  let total = 0;
  let asked = '';
  let row = 0;
  let column = 0;
  /** @type {HTMLInputElement|null} */
  let editor = null;
  let drawn = '';
  let widths = '';

  const extent = () => ({ total, rowHeight: ROW, viewHeight: Math.max(ROW, element.clientHeight - ROW) });
  const columns = () => window?.columns ?? [];
  /** @param {number} at */
  const rowAt = (at) => (window && at >= window.from ? window.rows[at - window.from] : undefined);

  function ask(/** @type {number} */ first, /** @type {number} */ count) {
    const complete = window && window.revision === revision && first >= window.from && first + count <= window.from + window.rows.length;
    if (complete || total === 0) return;
    const from = Math.max(0, first - Math.floor((WINDOW - count) / 2));
    const wanted = `${revision} ${from}`;
    if (wanted === asked) return;
    asked = wanted;
    actions.ask(from, WINDOW);
  }

  function drawHead() {
    const longest = columns().map(({ name, type }, i) => Math.max(name.length + type.length, ...(window?.rows ?? []).map((cells) => cells[i]?.length ?? 0)));
    const next = [`${Math.max(3, String(total).length) + 5}ch`, ...longest.map((length) => `${Math.min(WIDEST, Math.max(6, length)) + 2}ch`)].join(' ');
    // Columns only ever grow while a table is shown: they must not jump about during scrolling.
    if (widths.split(' ').length !== next.split(' ').length) widths = next;
    else widths = next.split(' ').map((width, i) => `${Math.max(parseInt(width, 10), parseInt(widths.split(' ')[i] ?? '0', 10))}ch`).join(' ');
    element.style.setProperty('--columns', widths);
    head.replaceChildren(
      h('span', { role: 'columnheader', class: 'grid-number', 'aria-colindex': 1 }, 'row'),
      ...columns().map(({ name, type }, i) =>
        h('span', { role: 'columnheader', 'aria-colindex': i + 2, title: `${name}, read as ${type === 'number' ? 'numbers' : 'labels'}`, 'data-type': type }, h('b', {}, name), h('i', {}, type)),
      ),
    );
    element.setAttribute('aria-colcount', String(columns().length + 1));
  }

  function drawRows() {
    const seen = visibleRows(extent(), element.scrollTop);
    ask(seen.first, seen.count);
    const wanted = JSON.stringify([seen, row, column, revision, window?.from, window?.revision]);
    if (wanted === drawn || editor) return;
    drawn = wanted;
    body.style.height = `${bodyHeight(extent())}px`;
    const excluded = new Set(window?.excluded ?? []);
    body.replaceChildren(
      ...Array.from({ length: seen.count }, (_, i) => {
        const at = seen.first + i;
        const line = h('div', { role: 'row', class: `grid-row${excluded.has(at) ? ' excluded' : ''}`, 'aria-rowindex': at + 2 });
        line.style.top = `${seen.top + i * ROW}px`;
        line.append(h('span', { role: 'rowheader', class: 'grid-number', 'aria-colindex': 1 }, String(at + 1), excluded.has(at) && h('span', { class: 'excluded-mark', title: 'left out of the analysis' }, ' out')));
        line.append(...columns().map((entry, c) => value(rowAt(at)?.[c], entry.type, at, c)));
        return line;
      }),
    );
    const active = body.querySelector('.active');
    if (active) element.setAttribute('aria-activedescendant', id);
    else element.removeAttribute('aria-activedescendant');
  }

  /**
   * @param {string|undefined} text
   * @param {string} type
   * @param {number} at
   * @param {number} c
   */
  function value(text, type, at, c) {
    const active = at === row && c === column;
    const cell = h('span', { role: 'gridcell', 'aria-colindex': c + 2, 'data-type': type, class: active ? 'active' : undefined, 'aria-selected': String(active) }, text ?? '…');
    if (active) cell.id = id;
    cell.addEventListener('mousedown', (event) => {
      event.preventDefault();
      go(at, c);
      element.focus({ preventScroll: true });
    });
    cell.addEventListener('dblclick', () => edit());
    return cell;
  }

  function go(/** @type {number} */ toRow, /** @type {number} */ toColumn) {
    if (editor) commit();
    row = Math.max(0, Math.min(toRow, total - 1));
    column = Math.max(0, Math.min(toColumn, columns().length - 1));
    element.scrollTop = scrollToRow(extent(), element.scrollTop, row);
    drawRows();
    const cell = body.querySelector('.active');
    if (cell instanceof HTMLElement) bringSideways(element, cell, head);
  }

  function edit(/** @type {string} */ start = rowAt(row)?.[column] ?? '') {
    const cell = body.querySelector('.active');
    if (!cell || editor || rowAt(row) === undefined) return;
    const name = columns()[column]?.name ?? '';
    const input = h('input', { type: 'text', class: 'grid-editor', value: start, autocomplete: 'off', spellcheck: false, 'aria-label': `${name}, row ${row + 1}` });
    editor = input;
    cell.replaceChildren(input);
    input.addEventListener('keydown', onEditorKey);
    input.addEventListener('blur', () => commit());
    input.focus();
    input.setSelectionRange(start.length, start.length);
  }

  function finish() {
    editor = null;
    drawn = '';
    drawRows();
  }

  function commit() {
    if (!editor) return;
    const typed = editor.value;
    const before = rowAt(row)?.[column];
    finish();
    if (typed === before) return;
    actions.setValue(row, column, typed);
    const cell = body.querySelector('.active');
    if (cell) setText(cell, typed);
  }

  function onEditorKey(/** @type {KeyboardEvent} */ event) {
    event.stopPropagation();
    const step = { Enter: [event.shiftKey ? -1 : 1, 0], Tab: [0, event.shiftKey ? -1 : 1] }[event.key];
    if (event.key === 'Escape') finish();
    else if (step) commit();
    else return;
    event.preventDefault();
    element.focus({ preventScroll: true });
    if (step) go(row + (step[0] ?? 0), column + (step[1] ?? 0));
  }

  element.addEventListener('keydown', (event) => {
    if (editor) return;
    const place = moved(event, { row, column }, { rows: total, columns: columns().length, page: Math.floor(extent().viewHeight / ROW) });
    if (place) go(place.row, place.column);
    else if (event.key === 'Enter' || event.key === 'F2') edit();
    else if (event.key === 'Delete' || event.key === 'Backspace') actions.setValue(row, column, '');
    else if (event.key.length === 1 && !event.ctrlKey && !event.metaKey && !event.altKey) edit(event.key);
    else return;
    event.preventDefault();
  });
  element.addEventListener('scroll', () => {
    if (editor) commit();
    drawRows();
  });
  element.addEventListener('paste', (event) => {
    if (editor) return;
    const text = event.clipboardData?.getData('text/plain') ?? '';
    event.preventDefault();
    if (looksLikeTable(text)) actions.setTable(text);
    else if (text) actions.setValue(row, column, text.trim());
  });
  element.addEventListener('copy', (event) => {
    if (editor) return;
    event.preventDefault();
    event.clipboardData?.setData('text/plain', rowAt(row)?.[column] ?? '');
  });

  return {
    element,
    /**
     * @param {number} rows
     * @param {number} nowRevision
     * @param {Window|undefined} nowWindow
     */
    draw(rows, nowRevision, nowWindow) {
      const resized = rows !== total;
      total = rows;
      revision = nowRevision;
      if (nowWindow !== window) {
        window = nowWindow;
        drawHead();
      }
      if (resized) {
        element.style.height = total > MOST_ROWS_IN_SIGHT ? `${(MOST_ROWS_IN_SIGHT + 1.5) * ROW}px` : '';
        element.setAttribute('aria-rowcount', String(total + 1));
        row = Math.min(row, Math.max(0, total - 1));
      }
      drawRows();
    },
  };
}

/**
 * Scrolls sideways so that the active value is not behind the column of row numbers or beyond the edge.
 * @param {HTMLElement} grid
 * @param {HTMLElement} cell
 * @param {HTMLElement} head
 */
function bringSideways(grid, cell, head) {
  const numbers = /** @type {HTMLElement|null} */ (head.firstElementChild)?.offsetWidth ?? 0;
  const left = cell.offsetLeft - numbers;
  const right = cell.offsetLeft + cell.offsetWidth - grid.clientWidth;
  if (grid.scrollLeft > left) grid.scrollLeft = left;
  else if (grid.scrollLeft < right) grid.scrollLeft = right;
}
