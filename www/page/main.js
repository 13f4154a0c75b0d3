/** The page's beginning: puts the parts together and starts the engine. */

import './compiling.js';
import { createActions } from './actions.js';
import { examples as readExamples } from './blocks.js';
import { h, setText } from './dom.js';
import { createFiles, saveNotebook } from './files.js';
import { exampleAsked } from './address.js';
import { createNotices } from './notices.js';
import { closeDoors } from './policy.js';
import { createPrivacy } from './privacy.js';
import { createProtocol } from './protocol.js';
import { createRail } from './rail.js';
import { createSession } from './session.js';
import { EMPTY } from './state.js';
import { createStore } from './store.js';
import { looksLikeTable } from './tables.js';
import { readTextFace } from './text-later.js';
import { createToolbar } from './toolbar.js';

/** When the text face is read: after the first answers, before anybody can have asked for it. In milliseconds. */
const WITH_TIME = 800;

/** @param {string} id */
function place(id) {
  const element = document.getElementById(id);
  if (!element) throw new Error(`The page has no place "${id}".`);
  return element;
}

async function begin() {
  closeDoors();
  createPrivacy(place('privacy'));
  const examples = readExamples();
  const store = createStore(EMPTY);
  const session = createSession(store);
  const flush = () => protocol.flush();
  const status = place('status');
  const say = (/** @type {string} */ words) => setText(status, words);
  const files = createFiles({
    onNotebook: (text, name) => void session.openGuarded(text, name, save),
    onTable: (cell, text) => actions.setTable(cell, text),
    onProblem: (words) => actions.notify(words, 'problem'),
  });
  const actions = createActions({ store, send: session.send, flush, chooseFile: files.choose, say });

  function save() {
    flush();
    // While a fresh engine is starting the save waits for it, behind what was typed meanwhile.
    if (store.get().engine === 'stopped') saveNotebook(store.get().fileName, session.keptText());
    else session.send({ type: 'save' });
  }
  const openExample = (/** @type {string} */ name) => {
    const example = examples.find((candidate) => candidate.name === name) ?? examples[0];
    if (example) void session.openGuarded(example.text, example.name, save);
  };
  const protocol = createProtocol(place('protocol'), store.get, actions, { examples, openExample });
  const views = [
    protocol,
    createRail(place('rail'), (cell) => actions.focus(cell, 'head')),
    createToolbar(place('tools'), place('file'), examples, {
      open: () => files.choose(null),
      save,
      report: () => {
        flush();
        session.send({ type: 'report', date: new Intl.DateTimeFormat('en-GB', { dateStyle: 'long' }).format(new Date()) });
      },
      undo: actions.undo,
      redo: actions.redo,
      example: openExample,
      rename: (name) => store.update((state) => ({ ...state, fileName: name })),
    }),
    createNotices(place('notices'), { dismiss: actions.dismiss, restart: session.restart, saveKept: save }),
  ];
  store.subscribe((state) => {
    for (const view of views) view.draw(state);
  });
  for (const view of views) view.draw(store.get());
  listenToKeys({ save, undo: actions.undo, redo: actions.redo });
  // An empty notebook takes a table wherever it is pasted.
  addEventListener('paste', (event) => {
    const text = event.clipboardData?.getData('text/plain') ?? '';
    const typing = event.target instanceof Element && event.target.matches('input, textarea, .text-face');
    if (store.get().order.length > 0 || typing || !looksLikeTable(text)) return;
    event.preventDefault();
    actions.setTable(null, text);
  });
  addEventListener('beforeunload', (event) => {
    flush();
    if (store.get().unsaved) event.preventDefault();
  });

  await session.start(say, flush);
  const asked = exampleAsked(location.hash);
  if (asked !== null) openExample(asked);
  setTimeout(() => void readTextFace(), WITH_TIME);
}

/**
 * Keys for the notebook as a whole. In a control that has an undo of its own, that one is meant.
 * @param {{ save: () => void, undo: () => void, redo: () => void }} actions
 */
function listenToKeys({ save, undo, redo }) {
  addEventListener('keydown', (event) => {
    if (event.defaultPrevented || event.altKey || !(event.ctrlKey || event.metaKey)) return;
    const key = event.key.toLowerCase();
    const typing = event.target instanceof Element && event.target.matches('input, textarea, .text-face');
    if (key === 's') save();
    else if (key === 'z' && !typing) (event.shiftKey ? redo : undo)();
    else if (key === 'y' && !typing) redo();
    else return;
    event.preventDefault();
  });
}

begin().catch((error) => {
  const words = error instanceof Error ? error.message : String(error);
  place('notices').replaceChildren(h('div', { class: 'notice problem', role: 'alert' }, h('p', {}, `Levelwise could not start: ${words} It needs a browser of 2024 or later with WebAssembly switched on.`)));
});
