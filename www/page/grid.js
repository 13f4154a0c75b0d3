/**
 * The table of a data cell: only the rows in sight are in the document, and only they are asked from the engine. The grid
 * itself has the keyboard and names the active value; one value at a time is edited in place.
 */

import { freshId, h } from './dom.js';
import { moved } from './grid-keys.js';
import { bringSideways, columnWidths, headCells, rowLine, valueEditor } from './grid-parts.js';
import { bodyHeight, scrollToRow, visibleRows } from './scroll.js';
import { looksLikeTable } from './tables.js';

/** @typedef {import('./messages.js').Rows & { revision: number }} Window */

const ROW = 28;
const MOST_ROWS_IN_SIGHT = 12;
/** Rows asked for at once: enough for several screens, so that scrolling seldom waits. */
const WINDOW = 120;

/**
 * @typedef {object} GridActions
 * @property {(from: number, count: number) => void} ask
 * @property {(row: number, column: number, value: string) => void} setValue
 * @property {(text: string) => void} setTable
 */

/**
 * @param {string} label
 * @param {GridActions} actions
 */
export function createGrid(label, actions) {
  const head = h('div', { class: 'grid-head', role: 'row', 'aria-rowindex': 1 });
  const body = h('div', { class: 'grid-body', role: 'rowgroup' });
  const heads = h('div', { role: 'rowgroup', class: 'grid-headgroup' }, head);
  const element = h('div', { class: 'grid', role: 'grid', tabIndex: 0, 'aria-label': label }, heads, body);
  const activeId = freshId('value');
  /** @type {Window|undefined} */
  let window;
  let revision = -1;
  let total = 0;
  let asked = '';
  let row = 0;
  let column = 0;
  /** @type {ReturnType<typeof valueEditor>|null} */
  let editor = null;
  let drawn = '';
  /** @type {number[]} */
  let widths = [];

  /** How far it is scrolled. Kept, since asking for it while drawing would make the browser lay out the whole page. */
  let scrolled = 0;
  const rowsInSight = () => (total > MOST_ROWS_IN_SIGHT ? MOST_ROWS_IN_SIGHT + 0.5 : Math.max(1, total));
  const extent = () => ({ total, rowHeight: ROW, viewHeight: rowsInSight() * ROW });
  const columns = () => window?.columns ?? [];
  /** @param {number} at */
  const valuesAt = (at) => (window && at >= window.from ? window.rows[at - window.from] : undefined);
  const activeCell = () => /** @type {HTMLElement|null} */ (body.querySelector('.active'));

  /**
   * Asks for the rows in sight if they are not at hand as they are now.
   * @param {number} first
   * @param {number} count
   */
  function ask(first, count) {
    const current = window?.revision === revision;
    if (total === 0 || (window && current && first >= window.from && first + count <= window.from + window.rows.length)) return;
    const from = Math.max(0, first - Math.floor((WINDOW - count) / 2));
    const wanted = `${revision} ${from}`;
    if (wanted === asked) return;
    asked = wanted;
    actions.ask(from, WINDOW);
  }

  function drawHead() {
    if (!window) return;
    widths = columnWidths(widths, window);
    element.style.setProperty('--columns', widths.map((width) => `${width}ch`).join(' '));
    element.setAttribute('aria-colcount', String(widths.length));
    head.replaceChildren(...headCells(window.columns));
  }

  function drawRows() {
    const seen = visibleRows(extent(), scrolled);
    ask(seen.first, seen.count);
    const wanted = JSON.stringify([seen, row, column, revision, window?.from, window?.revision]);
    if (wanted === drawn || editor) return;
    drawn = wanted;
    body.style.height = `${bodyHeight(extent())}px`;
    const excluded = new Set(window?.excluded);
    const lines = Array.from({ length: seen.count }, (_, i) => {
      const at = seen.first + i;
      const activeColumn = at === row ? column : -1;
      const line = rowLine({ row: at, values: valuesAt(at), columns: columns(), excluded: excluded.has(at), activeColumn, activeId });
      line.style.top = `${seen.top + i * ROW}px`;
      return line;
    });
    body.replaceChildren(...lines);
    if (activeCell()) element.setAttribute('aria-activedescendant', activeId);
    else element.removeAttribute('aria-activedescendant');
  }

  /**
   * @param {number} toRow
   * @param {number} toColumn
   */
  function go(toRow, toColumn) {
    editor?.finish();
    row = Math.max(0, Math.min(toRow, total - 1));
    column = Math.max(0, Math.min(toColumn, columns().length - 1));
    element.scrollTop = scrollToRow(extent(), element.scrollTop, row);
    scrolled = element.scrollTop;
    drawRows();
    const cell = activeCell();
    if (cell) bringSideways(element, cell, head);
  }

  /** @param {string} [start] what the editor begins with; the value itself if nothing is given */
  function edit(start) {
    const cell = activeCell();
    const before = valuesAt(row)?.[column];
    if (!cell || editor || before === undefined) return;
    editor = valueEditor({ label: `${columns()[column]?.name ?? ''}, row ${row + 1}`, start: start ?? before, onEnd });
    cell.replaceChildren(editor.input);
    editor.input.focus();
    editor.input.setSelectionRange(editor.input.value.length, editor.input.value.length);

    /** @type {Parameters<typeof valueEditor>[0]['onEnd']} */
    function onEnd(typed, step) {
      editor = null;
      drawn = '';
      drawRows();
      if (typed !== null && typed !== before) {
        actions.setValue(row, column, typed);
        activeCell()?.replaceChildren(typed);
      }
      if (!step) return;
      element.focus({ preventScroll: true });
      go(row + step[0], column + step[1]);
    }
  }

  /** @param {KeyboardEvent} event */
  function onKey(event) {
    if (editor) return;
    const size = { rows: total, columns: columns().length, page: Math.floor(extent().viewHeight / ROW) };
    const place = moved(event, { row, column }, size);
    if (place) go(place.row, place.column);
    else if (event.key === 'Enter' || event.key === 'F2') edit();
    else if (event.key === 'Delete' || event.key === 'Backspace') actions.setValue(row, column, '');
    else if (event.key.length === 1 && !event.ctrlKey && !event.metaKey && !event.altKey) edit(event.key);
    else return;
    event.preventDefault();
  }

  /** @param {MouseEvent} event */
  function onPointer(event) {
    const place = /** @type {Element} */ (event.target).closest('[data-place]')?.getAttribute('data-place')?.split(' ').map(Number);
    if (!place || (editor && event.target === editor.input)) return;
    event.preventDefault();
    go(place[0] ?? 0, place[1] ?? 0);
    element.focus({ preventScroll: true });
    if (event.detail > 1) edit();
  }

  /** @param {ClipboardEvent} event */
  function onPaste(event) {
    if (editor) return;
    const text = event.clipboardData?.getData('text/plain') ?? '';
    event.preventDefault();
    if (looksLikeTable(text)) actions.setTable(text);
    else if (text) actions.setValue(row, column, text.trim());
  }

  /** @param {ClipboardEvent} event */
  function onCopy(event) {
    if (editor) return;
    event.preventDefault();
    event.clipboardData?.setData('text/plain', valuesAt(row)?.[column] ?? '');
  }

  element.addEventListener('keydown', onKey);
  element.addEventListener('mousedown', onPointer);
  element.addEventListener('paste', onPaste);
  element.addEventListener('copy', onCopy);
  element.addEventListener('scroll', () => {
    editor?.finish();
    scrolled = element.scrollTop;
    drawRows();
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
        element.style.height = total > MOST_ROWS_IN_SIGHT ? `${(rowsInSight() + 1) * ROW}px` : '';
        element.setAttribute('aria-rowcount', String(total + 1));
        row = Math.min(row, Math.max(0, total - 1));
      }
      drawRows();
    },
  };
}
