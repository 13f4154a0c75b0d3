/** The rail: the cells with their one-line answers. It is the table of contents and the summary in one. */

import { conditionMark } from './condition.js';
import { arrange, h, setText } from './dom.js';
import { kindTitle } from './kinds.js';

/** @typedef {import('./state.js').State} State */
/** @typedef {import('./messages.js').CellView} CellView */

/**
 * @param {HTMLElement} element
 * @param {(cell: number) => void} onChoose
 */
export function createRail(element, onChoose) {
  const toggle = h('button', { type: 'button', class: 'rail-toggle quiet', 'aria-expanded': 'false', 'aria-controls': 'rail-list' });
  const list = h('ol', { class: 'rail-list', id: 'rail-list' });
  element.replaceChildren(toggle, list);
  toggle.addEventListener('click', () => setOpen(toggle.getAttribute('aria-expanded') !== 'true'));
  /** @type {Map<number, ReturnType<typeof createItem>>} */
  const items = new Map();
  let inView = -1;

  /** @param {boolean} open */
  function setOpen(open) {
    toggle.setAttribute('aria-expanded', String(open));
    element.classList.toggle('open', open);
  }

  /** Marks the cell that is being read: the last one that begins above the upper third of the window. */
  function markInView() {
    const line = window.innerHeight / 3;
    let current = -1;
    for (const id of items.keys()) {
      const top = document.getElementById(`cell-${id}`)?.getBoundingClientRect().top ?? Infinity;
      if (top <= line || current === -1) current = id;
    }
    if (current === inView) return;
    inView = current;
    for (const [id, item] of items) item.setCurrent(id === current);
  }
  let waiting = false;
  /** Marks it with the next frame: looking for it any earlier would make the browser lay out the page once more. */
  function markSoon() {
    if (waiting) return;
    waiting = true;
    requestAnimationFrame(() => {
      waiting = false;
      markInView();
    });
  }
  addEventListener('scroll', markSoon, { passive: true });

  return {
    /** @param {State} now */
    draw(now) {
      const old = new Map(items);
      items.clear();
      for (const id of now.order) {
        const item = old.get(id) ?? createItem(() => {
          setOpen(false);
          onChoose(id);
        });
        items.set(id, item);
        const cell = now.cells.get(id);
        if (cell) item.draw(cell);
      }
      arrange(list, [...items.values()].map((item) => item.element));
      element.hidden = now.order.length === 0;
      setText(toggle, summary(now));
      inView = -1;
      markSoon();
    },
  };
}

/** @param {State} now */
function summary(now) {
  const count = now.order.length;
  const needing = [...now.cells.values()].filter((cell) => cell.condition === 'needs you').length;
  return `${count} ${count === 1 ? 'cell' : 'cells'}${needing > 0 ? `, ${needing} ${needing === 1 ? 'needs' : 'need'} you` : ''}`;
}

/** @param {() => void} onChoose */
function createItem(onChoose) {
  const mark = conditionMark();
  const title = h('span', { class: 'rail-title' });
  const line = h('span', { class: 'rail-line' });
  const button = h('button', { type: 'button', onclick: onChoose }, h('span', { class: 'rail-head' }, title, mark.element), line);
  const element = h('li', {}, button);
  return {
    element,
    /** @param {boolean} current */
    setCurrent(current) {
      if (current) button.setAttribute('aria-current', 'location');
      else button.removeAttribute('aria-current');
    },
    /** @param {CellView} cell */
    draw(cell) {
      mark.draw(cell.condition);
      setText(title, cell.name ?? kindTitle(cell.kind));
      setText(line, cell.headline || cell.diagnostics[0]?.message || '');
    },
  };
}
