/**
 * Everything a person can do, as functions: each sends a request, replaces the state, or both. Views call these and know
 * neither the worker nor the store.
 */

import { cellTitle } from './kinds.js';
import * as states from './state.js';

/** @typedef {import('./messages.js').Kind} Kind */
/** @typedef {import('./messages.js').Request} Request */
/** @typedef {import('./state.js').State} State */

/**
 * @typedef {object} Surroundings
 * @property {import('./store.js').Store<State>} store
 * @property {(request: Request) => number} send
 * @property {() => void} flush sends what stands in the controls and has not been sent
 * @property {(cell: number|null) => void} chooseFile
 * @property {(words: string) => void} say
 */

/** @typedef {ReturnType<typeof createActions>} Actions */

/** @param {Surroundings} surroundings */
export function createActions({ store, send, flush, chooseFile, say }) {
  let stamps = 0;

  /** @param {(state: State) => State} change */
  const update = (change) => store.update(change);

  /**
   * Sends a request that changes the notebook.
   * @param {Request} request
   */
  function change(request) {
    const seq = send(request);
    update((state) => ({ ...state, unsaved: true, notice: null }));
    return seq;
  }

  /**
   * Sends a request that adds cells, of which the last gets the keyboard.
   * @param {Request} request
   */
  function changeAndExpect(request) {
    const seq = change(request);
    update((state) => ({ ...state, adding: null, expecting: { seq, known: state.order } }));
  }

  /**
   * @param {number} cell
   * @param {'head'|'sentence'|'text'} part
   * @param {number} [at]
   */
  function focus(cell, part, at) {
    stamps += 1;
    update((state) => ({ ...state, focus: { cell, part, at, stamp: -stamps } }));
  }

  return {
    say,
    chooseFile,
    focus,

    setField(/** @type {number} */ cell, /** @type {string} */ field, /** @type {string} */ value) {
      const seq = change({ type: 'set_field', cell, field, value });
      update((state) => states.afterChange(state, cell, seq));
    },
    editText(/** @type {number} */ cell, /** @type {string} */ text) {
      const seq = change({ type: 'edit_text', cell, text });
      update((state) => states.afterTyping(state, cell, text, seq));
    },
    rename(/** @type {number} */ cell, /** @type {string} */ name) {
      const seq = change({ type: 'rename', cell, name });
      update((state) => states.afterChange(state, cell, seq));
    },
    setValue(/** @type {number} */ cell, /** @type {number} */ row, /** @type {number} */ column, /** @type {string} */ value) {
      change({ type: 'set_value', cell, row, column, value });
    },
    setTable(/** @type {number|null} */ cell, /** @type {string} */ text) {
      if (cell === null) changeAndExpect({ type: 'set_table', cell, text });
      else change({ type: 'set_table', cell, text });
    },
    askRows(/** @type {number} */ cell, /** @type {number} */ from, /** @type {number} */ count) {
      send({ type: 'rows', cell, from, count });
    },
    add(/** @type {Kind} */ kind, /** @type {number|null} */ after) {
      flush();
      changeAndExpect({ type: 'add', kind, after });
    },
    duplicate(/** @type {number} */ cell) {
      flush();
      changeAndExpect({ type: 'duplicate', cell });
    },
    remove(/** @type {number} */ cell) {
      flush();
      const { order, cells } = store.get();
      const at = order.indexOf(cell);
      const view = cells.get(cell);
      change({ type: 'remove', cell });
      const neighbour = order[at + 1] ?? order[at - 1];
      if (neighbour !== undefined) focus(neighbour, 'head');
      if (view) say(`${cellTitle(view)} is deleted. Undo brings it back.`);
    },
    moveBy(/** @type {number} */ cell, /** @type {number} */ by) {
      flush();
      const { order } = store.get();
      const to = order.indexOf(cell) + by;
      if (to < 0 || to >= order.length) return;
      change({ type: 'move', cell, to });
      say(`Moved to place ${to + 1} of ${order.length}.`);
    },
    undo() {
      flush();
      change({ type: 'undo' });
    },
    redo() {
      flush();
      change({ type: 'redo' });
    },
    toggleText(/** @type {number} */ cell) {
      flush();
      const opens = !store.get().texts.has(cell);
      update((state) => ({ ...state, texts: states.toggled(state.texts, cell) }));
      if (opens) focus(cell, 'text');
    },
    showInText(/** @type {number} */ cell, /** @type {number} */ at) {
      update((state) => (state.texts.has(cell) ? state : { ...state, texts: states.toggled(state.texts, cell) }));
      focus(cell, 'text', at);
    },
    openAdding(/** @type {number|null} */ after) {
      update((state) => ({ ...state, adding: state.adding && state.adding.after === after ? null : { after } }));
    },
    closeAdding() {
      update((state) => ({ ...state, adding: null }));
    },
    notify(/** @type {string} */ text, /** @type {'plain'|'problem'} */ tone) {
      update((state) => ({ ...state, notice: { text, tone } }));
    },
    dismiss() {
      update((state) => ({ ...state, notice: null }));
    },
  };
}
