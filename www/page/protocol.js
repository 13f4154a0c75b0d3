/** The column of cells, with a quiet place between each two where another can be added. */

import { createCell } from './cell.js';
import { arrange, drawing, freshId, h } from './dom.js';
import { kindTitle } from './kinds.js';
import { createStart } from './start.js';

/** @typedef {import('./state.js').State} State */
/** @typedef {import('./actions.js').Actions} Actions */
/** @typedef {ReturnType<typeof createCell>} Cell */

/**
 * @param {HTMLElement} element
 * @param {() => State} state
 * @param {Actions} actions
 * @param {import('./start.js').StartActions} startActions
 */
export function createProtocol(element, state, actions, startActions) {
  const start = createStart(startActions, actions);
  /** @type {Map<number, Cell>} */
  const cells = new Map();
  /** @type {Map<number|null, ReturnType<typeof createGap>>} */
  const gaps = new Map();
  let focused = 0;

  /** @param {number|null} after */
  function gapAfter(after) {
    const gap = gaps.get(after) ?? createGap(after, actions);
    gaps.set(after, gap);
    return gap;
  }

  /** @param {State} now */
  function draw(now) {
    for (const id of now.order) if (!cells.has(id)) cells.set(id, createCell(id, state, actions));
    for (const [id, cell] of cells) {
      if (now.order.includes(id)) continue;
      cell.destroy();
      cells.delete(id);
      gaps.delete(id);
    }
    const active = document.activeElement;
    const empty = now.order.length === 0;
    const nodes = [
      ...(empty ? [start.element] : []),
      gapAfter(null).element,
      ...now.order.flatMap((id) => [cells.get(id)?.element, gapAfter(id).element]),
    ];
    arrange(element, nodes.filter((node) => node !== undefined));
    for (const [after, gap] of gaps) gap.draw(now.kinds, now.adding !== null && now.adding.after === after, after === null && empty);
    start.draw(now);
    for (const cell of cells.values()) cell.draw(now);
    if (active instanceof HTMLElement && active !== document.activeElement && active.isConnected) active.focus();
    const wish = now.focus;
    const target = wish && cells.get(wish.cell);
    if (wish && target && wish.stamp !== focused) {
      focused = wish.stamp;
      target.focus(wish);
    }
  }

  return {
    draw,
    flush() {
      for (const cell of cells.values()) cell.flush();
    },
  };
}

/**
 * The place after a cell, or before the first one.
 * @param {number|null} after
 * @param {Actions} actions
 */
function createGap(after, actions) {
  const listId = freshId('kinds');
  const button = h('button', { type: 'button', class: 'quiet add', 'aria-controls': listId, onclick: () => actions.openAdding(after) }, drawing('M8 3v10M3 8h10'), 'Add a cell here');
  const list = h('ul', { class: 'kinds', id: listId });
  /** @type {State['kinds']} */
  let listed = [];
  const element = h('div', { class: 'gap' }, button, list);
  element.addEventListener('keydown', (event) => {
    if (event.key !== 'Escape' || list.hidden) return;
    actions.closeAdding();
    button.focus();
  });
  return {
    element,
    /**
     * @param {State['kinds']} kinds
     * @param {boolean} open
     * @param {boolean} bare the notebook has no cells to stand between
     */
    draw(kinds, open, bare) {
      if (open && kinds !== listed) {
        listed = kinds;
        list.replaceChildren(
          ...kinds.map(({ name, purpose }) => h('li', {}, h('button', { type: 'button', onclick: () => actions.add(name, after) }, h('b', {}, kindTitle(name)), h('span', {}, purpose)))),
        );
      }
      button.setAttribute('aria-expanded', String(open));
      list.hidden = !open;
      element.classList.toggle('bare', bare);
    },
  };
}
