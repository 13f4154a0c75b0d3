/** The bar at the top: the notebook's name and what can be done with the notebook as a whole. */

import { drawing, h, setText } from './dom.js';
import { fileStem } from './tables.js';
import { nextTheme, showTheme } from './theme.js';

/** @typedef {import('./state.js').State} State */

/**
 * @typedef {object} BarActions
 * @property {() => void} open
 * @property {() => void} save
 * @property {() => void} report
 * @property {() => void} undo
 * @property {() => void} redo
 * @property {(name: string) => void} example
 * @property {(name: string) => void} rename
 */

/**
 * @param {HTMLElement} tools
 * @param {HTMLElement} file
 * @param {readonly { name: string, title: string }[]} examples
 * @param {BarActions} actions
 */
export function createToolbar(tools, file, examples, actions) {
  const undo = h('button', { type: 'button', class: 'icon-button', 'aria-label': 'Undo', title: 'Undo', onclick: () => guarded(undo, actions.undo) }, drawing('M6 3 3 6l3 3M3 6h6.5a3.5 3.5 0 0 1 0 7H6'));
  const redo = h('button', { type: 'button', class: 'icon-button', 'aria-label': 'Redo', title: 'Redo', onclick: () => guarded(redo, actions.redo) }, drawing('m10 3 3 3-3 3M13 6H6.5a3.5 3.5 0 0 0 0 7H10'));
  const example = h('select', { 'aria-label': 'Open an example' }, h('option', { value: '' }, 'Examples'), ...examples.map(({ name, title }) => h('option', { value: name }, title)));
  example.addEventListener('change', () => {
    const name = example.value;
    example.value = '';
    if (name) actions.example(name);
  });
  tools.replaceChildren(
    h('div', { class: 'tool-set', role: 'group', 'aria-label': 'Undo and redo' }, undo, redo),
    h('button', { type: 'button', onclick: actions.open }, 'Open…'),
    h('span', { class: 'select-box', hidden: examples.length === 0 }, example),
    h('button', { type: 'button', onclick: actions.save }, 'Save'),
    h('button', { type: 'button', onclick: actions.report }, 'Save report'),
    themeButton(),
  );

  const name = h('input', { type: 'text', 'aria-label': 'Name of the notebook’s file', autocomplete: 'off', spellcheck: false });
  const box = h('span', { class: 'blank typed name-box' }, name);
  const unsaved = h('span', { class: 'unsaved' });
  const fit = () => {
    box.dataset['shown'] = name.value;
  };
  name.addEventListener('input', fit);
  name.addEventListener('change', () => {
    name.value = fileStem(name.value);
    fit();
    actions.rename(name.value);
  });
  file.replaceChildren(box, unsaved);

  return {
    /** @param {State} now */
    draw(now) {
      file.hidden = now.order.length === 0 && !now.unsaved;
      if (document.activeElement !== name) name.value = now.fileName;
      fit();
      setText(unsaved, now.unsaved ? ' not saved' : '');
      document.title = now.order.length === 0 ? 'Levelwise' : `${now.fileName}${now.unsaved ? ' (not saved)' : ''}: Levelwise`;
      idle(undo, !now.canUndo);
      idle(redo, !now.canRedo);
    },
  };
}

function themeButton() {
  /** @type {import('./theme.js').Theme} */
  let theme = 'system';
  const words = { system: 'Light or dark: as the system', light: 'Light', dark: 'Dark' };
  const button = h('button', { type: 'button', class: 'icon-button' }, drawing('M8 2a6 6 0 1 0 0 12zM8 2a6 6 0 0 1 0 12'));
  const name = () => {
    button.setAttribute('aria-label', `Colours: ${words[theme].toLowerCase()}`);
    button.title = `Colours: ${words[theme].toLowerCase()}`;
  };
  button.addEventListener('click', () => {
    theme = nextTheme(theme);
    showTheme(theme);
    name();
  });
  name();
  return button;
}

/**
 * @param {HTMLButtonElement} button
 * @param {() => void} action
 */
function guarded(button, action) {
  if (button.getAttribute('aria-disabled') !== 'true') action();
}

/**
 * @param {HTMLButtonElement} button
 * @param {boolean} isIdle
 */
function idle(button, isIdle) {
  if (isIdle) button.setAttribute('aria-disabled', 'true');
  else button.removeAttribute('aria-disabled');
}
