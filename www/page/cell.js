/** One cell of the protocol: its head, its sentence and its text, what is wrong with it, and its answer. */

import { createAnswer } from './answer.js';
import { conditionMark } from './condition.js';
import { drawing, h, setText } from './dom.js';
import { createGrid } from './grid.js';
import { cellTitle, kindTitle } from './kinds.js';
import { createPastePlace } from './paste-place.js';
import { createSentence } from './sentence.js';
import { isStale } from './state.js';
import { readTextFace, textFaceMaker } from './text-later.js';

/** @typedef {import('./state.js').State} State */
/** @typedef {import('./messages.js').CellView} CellView */
/** @typedef {import('./messages.js').Diagnostic} Diagnostic */
/** @typedef {import('./actions.js').Actions} Actions */

const UP = 'M8 13V3.5M4 7.5l4-4 4 4';
const DOWN = 'M8 3v9.5M4 8.5l4 4 4-4';
const TWIN = 'M5.5 5.5h8v8h-8zM10.5 5.5v-3h-8v8h3';
const BIN = 'M3 4.5h10M6.5 4.5v-2h3v2M4.5 4.5l.7 9h5.6l.7-9';

/**
 * @param {number} id
 * @param {() => State} state
 * @param {Actions} actions
 */
export function createCell(id, state, actions) {
  const known = () => {
    const { cells, kinds } = state();
    const cell = cells.get(id);
    return { sentence: cell?.sentence ?? [], fields: kinds.find((kind) => kind.name === cell?.kind)?.fields ?? [], kinds: kinds.map((kind) => kind.name) };
  };
  const mark = conditionMark();
  const head = createHead(id, mark.element, actions);
  const sentence = createSentence((field, value) => actions.setField(id, field, value));
  const problems = h('ul', { class: 'problems' });
  const faces = h('div', { class: 'faces' }, sentence.element, sentence.help);
  const table = h('div', { class: 'table-place' });
  const answer = createAnswer(actions.say);
  const content = h('div', { class: 'content' }, faces, problems, table, answer.element);
  const element = h('section', { class: 'cell fresh', id: `cell-${id}` }, head.element, content);
  element.addEventListener('keydown', (event) => {
    const direction = { ArrowUp: -1, ArrowDown: 1 }[event.key];
    // In a list of choices and in the text face the same keys have a meaning already.
    const taken = event.target instanceof Element && event.target.matches('select, .text-face');
    if (!direction || !event.altKey || event.defaultPrevented || taken) return;
    event.preventDefault();
    actions.moveBy(id, direction);
  });

  /** @type {ReturnType<import('./text-later.js').CreateTextFace>|null} */
  let text = null;
  /** @type {ReturnType<typeof createGrid>|null} */
  let grid = null;
  /** @type {ReturnType<typeof createPastePlace>|null} */
  let place = null;
  /** @type {CellView|null} */
  let drawn = null;

  /**
   * @param {CellView} cell
   * @param {boolean} open
   */
  function drawText(cell, open) {
    const createTextFace = textFaceMaker();
    if (open && !createTextFace) {
      void readTextFace().then(textFaceIsHere);
    } else if (open && !text && createTextFace) {
      text = createTextFace({ label: `Text of ${cellTitle(cell)}`, text: cell.text, known, onText: (typed) => actions.editText(id, typed) });
      faces.append(text.element);
    } else if (!open && text) {
      text.destroy();
      text.element.remove();
      text = null;
    }
    text?.draw(cell);
  }

  /** Opens what was asked for before it could be. */
  function textFaceIsHere() {
    const { cells, texts, focus } = state();
    const cell = cells.get(id);
    if (!cell) return;
    drawText(cell, texts.has(id));
    if (focus?.cell === id && focus.part === 'text') text?.focus(focus.at);
  }

  /**
   * @param {CellView} cell
   * @param {State} now
   */
  function drawTable(cell, now) {
    if (cell.kind !== 'data') return;
    // While the table is read again the one before stays in sight, and with it the keyboard.
    if (cell.condition === 'working' && (grid || place)) return;
    const rows = cell.table_rows ?? 0;
    if (rows === 0 && !place) {
      grid = null;
      place = createPastePlace({ label: 'Paste or drop a table', onTable: (pasted) => actions.setTable(id, pasted), onOpen: () => actions.chooseFile(id) });
      table.replaceChildren(place.element);
    } else if (rows > 0 && !grid) {
      place = null;
      grid = createGrid(`Table of ${cellTitle(cell)}`, {
        ask: (from, count) => actions.askRows(id, from, count),
        setValue: (row, column, value) => actions.setValue(id, row, column, value),
        setTable: (pasted) => actions.setTable(id, pasted),
      });
      table.replaceChildren(grid.element, h('p', { class: 'table-hint' }, 'Type over a value to change it. A table pasted here replaces this one; undo brings it back.'));
    }
    // A table that cannot be read has no rows, but is there.
    place?.draw(/^\s*table\s*=\s*('''|""")\s*(?!\1)\S/m.test(cell.text));
    grid?.draw(rows, cell.revision, now.windows.get(id));
  }

  return {
    element,
    /** @param {State} now */
    draw(now) {
      const cell = now.cells.get(id);
      if (!cell) return;
      head.draw(cell, now);
      element.setAttribute('aria-label', cell.name ? cellTitle(cell) : `${cellTitle(cell)}, cell ${now.order.indexOf(id) + 1}`);
      mark.draw(cell.condition);
      element.dataset['kind'] = cell.kind ?? 'unknown';
      element.classList.toggle('plain', cell.kind === 'note' && cell.answer !== '');
      sentence.draw(cell.sentence, cell.diagnostics, isStale(now, id));
      if (cell.diagnostics !== drawn?.diagnostics) drawProblems(problems, cell.diagnostics, (at) => actions.showInText(id, at));
      // A stopped engine cannot write a blank into the text; the text itself can still be edited and is kept.
      sentence.element.inert = now.engine === 'stopped';
      drawText(cell, now.texts.has(id));
      drawTable(cell, now);
      answer.draw(cell, now.fileName);
      drawn = cell;
      // The first answers are shown before the cells further down are laid out.
      if (now.settled) setTimeout(() => element.classList.remove('fresh'));
    },
    /** @param {import('./state.js').FocusWish} wish */
    focus(wish) {
      element.scrollIntoView({ block: 'nearest' });
      if (wish.part === 'text' && text) text.focus(wish.at);
      else if (wish.part === 'sentence' && (place?.area ?? null)) place?.area.focus();
      else if (wish.part === 'head' || !sentence.focus()) head.focus();
    },
    flush() {
      sentence.flush();
      text?.flush();
    },
    destroy() {
      text?.destroy();
    },
  };
}

/**
 * The head: kind, name, condition, and what can be done with the cell as a whole.
 * @param {number} id
 * @param {HTMLElement} mark
 * @param {Actions} actions
 */
function createHead(id, mark, actions) {
  const heading = h('h2', { tabIndex: -1 });
  // A long name goes on in a second line, which only this control can.
  const name = h('textarea', { rows: 1, class: 'name', spellcheck: false, placeholder: 'name' });
  const nameBox = h('span', { class: 'blank typed name-box' }, name);
  const fit = () => {
    nameBox.dataset['shown'] = name.value || name.placeholder;
  };
  let known = '';
  const rename = () => {
    const typed = name.value.replace(/\s+/g, ' ').trim();
    if (typed !== known) actions.rename(id, typed);
  };
  name.addEventListener('input', fit);
  name.addEventListener('change', rename);
  name.addEventListener('keydown', (event) => {
    if (event.key === 'Enter') {
      event.preventDefault();
      rename();
    }
    if (event.key === 'Escape') {
      name.value = known;
      fit();
    }
  });
  const words = h('button', { type: 'button', class: 'quiet', onclick: () => actions.focus(id, 'sentence') }, 'Edit');
  const textButton = h('button', { type: 'button', class: 'quiet', onclick: () => actions.toggleText(id) }, 'Text');
  const up = iconButton(UP, () => actions.moveBy(id, -1));
  const down = iconButton(DOWN, () => actions.moveBy(id, 1));
  const twin = iconButton(TWIN, () => actions.duplicate(id));
  const bin = iconButton(BIN, () => actions.remove(id));
  const tools = h('div', { class: 'cell-tools', role: 'group' }, words, textButton, up, down, twin, bin);
  const element = h('header', { class: 'cell-head' }, h('div', { class: 'cell-title' }, heading, nameBox, mark), tools);

  return {
    element,
    focus: () => heading.focus(),
    /**
     * @param {CellView} cell
     * @param {State} now
     */
    draw(cell, now) {
      const title = cellTitle(cell);
      words.hidden = cell.kind !== 'note';
      words.setAttribute('aria-label', `Edit: ${title}`);
      setText(heading, kindTitle(cell.kind));
      name.setAttribute('aria-label', `Name of this cell (${kindTitle(cell.kind)})`);
      if (document.activeElement !== name || (cell.name ?? '') !== known) name.value = cell.name ?? '';
      known = cell.name ?? '';
      fit();
      tools.setAttribute('aria-label', title);
      textButton.setAttribute('aria-expanded', String(now.texts.has(id)));
      textButton.setAttribute('aria-label', `Text of ${title}`);
      labelled(up, `Move up: ${title}`, now.order[0] === id);
      labelled(down, `Move down: ${title}`, now.order.at(-1) === id);
      labelled(twin, `Duplicate: ${title}`, false);
      labelled(bin, `Delete: ${title} (undo brings it back)`, false);
    },
  };
}

/**
 * @param {string} path
 * @param {() => void} onClick
 */
function iconButton(path, onClick) {
  const button = h('button', { type: 'button', class: 'icon-button' }, drawing(path));
  button.addEventListener('click', () => {
    if (button.getAttribute('aria-disabled') !== 'true') onClick();
  });
  return button;
}

/**
 * A button that cannot act now stays reachable, so that the keyboard is not lost when a cell arrives at an end.
 * @param {HTMLButtonElement} button
 * @param {string} label
 * @param {boolean} idle
 */
function labelled(button, label, idle) {
  button.setAttribute('aria-label', label);
  button.title = label;
  if (idle) button.setAttribute('aria-disabled', 'true');
  else button.removeAttribute('aria-disabled');
}

/**
 * @param {HTMLElement} list
 * @param {readonly Diagnostic[]} diagnostics
 * @param {(at: number) => void} show
 */
function drawProblems(list, diagnostics, show) {
  list.hidden = diagnostics.length === 0;
  list.replaceChildren(
    ...diagnostics.map(({ message, start, line }) =>
      h('li', {}, h('span', {}, message), ' ', h('button', { type: 'button', class: 'quiet', onclick: () => show(start), 'aria-label': `Show in the text, line ${line}` }, 'Show in the text')),
    ),
  );
}
