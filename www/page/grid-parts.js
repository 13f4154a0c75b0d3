/** The pieces that a grid is drawn with: its columns' widths, its head, a row and the field in which a value is edited. */

import { h } from './dom.js';

/** @typedef {import('./messages.js').Rows} Rows */
/** @typedef {Rows['columns']} Columns */

/** The widest a column gets, in characters; longer values are cut off on the screen and whole in the editor. */
const WIDEST = 30;

/**
 * The widths of all columns, the row numbers' first. While the same table is shown columns only ever grow: they must not
 * jump about during scrolling.
 * @param {readonly number[]} before
 * @param {Rows} window
 * @returns {number[]} in characters
 */
export function columnWidths(before, { columns, rows, total }) {
  const numbers = Math.max(3, String(total).length) + 5;
  const values = columns.map(({ name, type }, i) => {
    const longest = Math.max(name.length + type.length, ...rows.map((row) => row[i]?.length ?? 0));
    return Math.min(WIDEST, Math.max(6, longest)) + 2;
  });
  const now = [numbers, ...values];
  return now.length === before.length ? now.map((width, i) => Math.max(width, before[i] ?? 0)) : now;
}

/**
 * The cells of the head.
 * @param {Columns} columns
 */
export function headCells(columns) {
  const corner = h('span', { role: 'columnheader', class: 'grid-number', 'aria-colindex': 1 }, 'row');
  return [
    corner,
    ...columns.map(({ name, type }, i) => {
      const title = `${name}, read as ${type === 'number' ? 'numbers' : 'labels'}`;
      return h('span', { role: 'columnheader', 'aria-colindex': i + 2, title, 'data-type': type }, h('b', {}, name), h('i', {}, type));
    }),
  ];
}

/**
 * One row. Values that have not come yet are shown as an ellipsis.
 * @param {{ row: number, values: readonly string[]|undefined, columns: Columns, excluded: boolean, activeColumn: number, activeId: string }} parts
 */
export function rowLine({ row, values, columns, excluded, activeColumn, activeId }) {
  const out = excluded && h('span', { class: 'excluded-mark', title: 'left out of the analysis' }, ' out');
  const number = h('span', { role: 'rowheader', class: 'grid-number', 'aria-colindex': 1 }, String(row + 1), out);
  const cells = columns.map(({ type }, column) => {
    const active = column === activeColumn;
    return h(
      'span',
      {
        role: 'gridcell',
        class: active ? 'active' : undefined,
        id: active ? activeId : '',
        'aria-colindex': column + 2,
        'aria-selected': String(active),
        'data-type': type,
        'data-place': `${row} ${column}`,
      },
      values?.[column] ?? '…',
    );
  });
  return h('div', { role: 'row', class: `grid-row${excluded ? ' excluded' : ''}`, 'aria-rowindex': row + 2 }, number, ...cells);
}

/**
 * The field in which one value is edited. It ends once: `onEnd` is told what was typed (null after Escape) and which way
 * the person goes on.
 * @param {{ label: string, start: string, onEnd: (typed: string|null, step: [number, number]|null) => void }} parts
 */
export function valueEditor({ label, start, onEnd }) {
  const input = h('input', { type: 'text', class: 'grid-editor', value: start, autocomplete: 'off', spellcheck: false, 'aria-label': label });
  let ended = false;
  /** @type {typeof onEnd} */
  const end = (typed, step) => {
    if (ended) return;
    ended = true;
    onEnd(typed, step);
  };
  input.addEventListener('blur', () => end(input.value, null));
  input.addEventListener('keydown', (event) => {
    event.stopPropagation();
    const back = event.shiftKey ? -1 : 1;
    if (event.key === 'Escape') end(null, [0, 0]);
    else if (event.key === 'Enter') end(input.value, [back, 0]);
    else if (event.key === 'Tab') end(input.value, [0, back]);
    else return;
    event.preventDefault();
  });
  return { input, finish: () => end(input.value, null) };
}

/**
 * Scrolls sideways so that the active value is not behind the column of row numbers or beyond the edge.
 * @param {HTMLElement} grid
 * @param {HTMLElement} cell
 * @param {HTMLElement} head
 */
export function bringSideways(grid, cell, head) {
  const numbers = /** @type {HTMLElement|null} */ (head.firstElementChild)?.offsetWidth ?? 0;
  const left = cell.offsetLeft - numbers;
  const right = cell.offsetLeft + cell.offsetWidth - grid.clientWidth;
  if (grid.scrollLeft > left) grid.scrollLeft = left;
  else if (grid.scrollLeft < right) grid.scrollLeft = right;
}
