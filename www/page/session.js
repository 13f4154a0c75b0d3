/**
 * The engine and the store together: what the engine says becomes state, and an engine that fails is replaced.
 */

import { ask } from './ask.js';
import { workerSource } from './blocks.js';
import { compiling } from './compiling.js';
import { createEngine } from './engine.js';
import { saveNotebook, saveReport } from './files.js';
import { notebookFile, preambleOf } from './keep.js';
import { cellTitle } from './kinds.js';
import { afterFailure, afterRecovery, afterUpdate, cellsInOrder, withRows } from './state.js';

/** @typedef {import('./messages.js').Message} Message */
/** @typedef {import('./messages.js').Request} Request */

/** Two failures within this time, in milliseconds, and the page no longer starts a fresh engine unasked. */
const SOON = 20_000;

/** @typedef {ReturnType<typeof createSession>} Session */

/**
 * @param {import('./store.js').Store<import('./state.js').State>} store
 */
export function createSession(store) {
  const engine = createEngine({ onMessage, onFailure });
  let preamble = '';
  let failedAt = -Infinity;
  let tell = (/** @type {string} */ _words) => {};
  /** Answers computed since all was settled the last time. */
  let renewed = 0;
  /** The request with which a fresh engine is being given the cells; 0 otherwise. */
  let recovery = 0;

  const keptText = () => notebookFile(preamble, cellsInOrder(store.get()));

  /** The number of the newest request that changes the notebook. */
  let changed = 0;
  /** The newest requests that no person made. @type {number[]} */
  let asides = [];
  /** The notebook that stands if the newest one cannot be opened. @type {{ seq: number, preamble: string, name: string, unsaved: boolean }|null} */
  let opening = null;
  /** Saves that have been asked for and not come back, in order. @type {{ name: string, changed: number }[]} */
  const saving = [];

  /** What was asked while no engine had the cells, naming them by their old ids; null while one has them. @type {Request[]|null} */
  let missed = null;
  let flush = () => {};

  function send(/** @type {Request} */ request) {
    if (missed && request.type !== 'open') {
      if (request.type !== 'rows') missed.push(request);
      return changed;
    }
    const seq = engine.send(request);
    if (request.type === 'save') saving.push({ name: store.get().fileName, changed });
    else if (request.type === 'rows') asides = [...asides.slice(-50), seq];
    else if (request.type !== 'report') changed = seq;
    return seq;
  }

  function saved(/** @type {string} */ text) {
    const asked = saving.shift();
    saveNotebook(asked?.name ?? store.get().fileName, text);
    // What was typed while the engine wrote the file is not in it.
    if (asked?.changed === changed) store.update((state) => ({ ...state, unsaved: false }));
  }

  function onMessage(/** @type {Message} */ message) {
    switch (message.type) {
      case 'ready':
        store.update((state) => ({ ...state, kinds: message.kinds, engine: recovery ? state.engine : 'ready' }));
        break;
      case 'update':
        // What a fresh engine says before it has the cells would take them off the page.
        if (message.seq < recovery) break;
        if (recovery) recovered(message);
        else store.update((state) => afterUpdate(state, message));
        tellWhenSettled(message);
        break;
      case 'rows':
        store.update((state) => withRows(state, message));
        break;
      case 'saved':
        saved(message.text);
        break;
      case 'report':
        saveReport(`${store.get().fileName}-report`, message.html);
        break;
      case 'refused':
        refused(message.seq, message.message);
        break;
      default:
    }
  }

  function tellWhenSettled(/** @type {import('./messages.js').Update} */ message) {
    renewed += message.recomputed.length;
    if (!message.settled) return;
    const words = settledWords(renewed, cellsInOrder(store.get()));
    renewed = 0;
    if (words) tell(words);
  }

  function refused(/** @type {number} */ seq, /** @type {string} */ words) {
    // Rows of a table that has gone meanwhile were asked for by the page, not by the person.
    if (asides.includes(seq)) return;
    if (seq === opening?.seq) backFromOpening();
    // What a blank shows is the person's typing; it goes back to what is in force.
    store.update((state) => ({ ...state, heard: Math.max(state.heard, seq), notice: { text: words, tone: 'problem' } }));
  }

  /** The notebook that was to be opened is not; the one before still stands. */
  function backFromOpening() {
    if (!opening) return;
    const { name, unsaved } = opening;
    preamble = opening.preamble;
    store.update((state) => ({ ...state, fileName: name, unsaved }));
  }

  function restart() {
    const text = keptText();
    // Texts typed meanwhile are in there already.
    missed = (missed ?? []).filter((request) => request.type !== 'edit_text');
    engine.restart();
    recovery = engine.send({ type: 'open', text });
    store.update((state) => ({ ...state, engine: 'starting' }));
  }

  function recovered(/** @type {import('./messages.js').Update} */ message) {
    recovery = 0;
    const before = store.get().order;
    store.update((state) => afterUpdate(afterRecovery(state, message.order), message));
    const again = missed ?? [];
    missed = null;
    const ids = new Map(before.map((id, i) => [id, message.order[i]]));
    for (const request of again) {
      const moved = withNewIds(request, ids);
      if (moved) send(moved);
    }
  }

  function onFailure(/** @type {string} */ words) {
    const again = performance.now() - failedAt < SOON;
    failedAt = performance.now();
    recovery = 0;
    saving.length = 0;
    if (opening && opening.seq > store.get().heard) backFromOpening();
    missed ??= [];
    flush();
    store.update(afterFailure);
    if (again) {
      store.update((state) => ({ ...state, notice: { text: `What the engine said last: ${words}`, tone: 'problem' } }));
      return;
    }
    restart();
    store.update((state) => ({ ...state, notice: { text: `The engine stopped (${words}) and a fresh one has taken over. Nothing you typed is lost.`, tone: 'problem' } }));
  }

  function open(/** @type {string} */ text, /** @type {string} */ name) {
    const { fileName, unsaved } = store.get();
    const before = preamble;
    preamble = preambleOf(text);
    opening = { seq: send({ type: 'open', text }), preamble: before, name: fileName, unsaved };
    store.update((state) => ({ ...state, fileName: name, unsaved: false, notice: null, remark: null, typed: new Map(), texts: new Set(), windows: new Map() }));
    scrollTo({ top: 0 });
  }

  return {
    send,
    restart,
    keptText,
    /**
     * @param {(words: string) => void} say
     * @param {() => void} flushControls
     */
    async start(say, flushControls) {
      tell = say;
      flush = flushControls;
      const source = workerSource();
      engine.prepare(source);
      engine.start({ source, module: await compiling });
    },
    /**
     * Opens a notebook, after asking if changes would be lost.
     * @param {string} text
     * @param {string} name
     * @param {() => void} save
     */
    async openGuarded(text, name, save) {
      flush();
      if (store.get().unsaved) {
        const answer = await ask('This notebook has changes that are not saved. Opening another one takes its place.', [
          { value: 'save', label: 'Save it, then open' },
          { value: 'open', label: 'Open without saving' },
          { value: '', label: 'Stay here' },
        ]);
        if (answer === '') return;
        if (answer === 'save') save();
      }
      open(text, name);
    },
  };
}

/**
 * A request that names cells by the ids that a fresh engine gave them; null if its cell is gone.
 * @param {Request} request
 * @param {ReadonlyMap<number, number|undefined>} ids
 * @returns {Request|null}
 */
function withNewIds(request, ids) {
  const key = 'cell' in request ? 'cell' : 'after';
  /** @type {number|null|undefined} */
  const old = Reflect.get(request, key);
  if (old === null || old === undefined) return request;
  const now = ids.get(old);
  return now === undefined ? null : { ...request, [key]: now };
}

/**
 * What is said when all is computed: how much was, and which cells need the person.
 * @param {number} count
 * @param {readonly import('./messages.js').CellView[]} cells
 */
function settledWords(count, cells) {
  const renewed = count === 0 ? '' : count === 1 ? 'One answer renewed.' : `${count} answers renewed.`;
  const needing = cells.filter((cell) => cell.condition === 'needs you').map(cellTitle);
  return needing.length === 0 ? renewed : `${renewed} Needs you: ${needing.join(', ')}.`.trim();
}
