/** What an empty notebook shows: what this is for, and the three ways to begin. */

import { h } from './dom.js';
import { createPastePlace } from './paste-place.js';

/** @typedef {import('./blocks.js').Example} Example */

/**
 * @typedef {object} StartActions
 * @property {readonly Example[]} examples
 * @property {(name: string) => void} openExample
 */

/**
 * @param {StartActions} start
 * @param {import('./actions.js').Actions} actions
 */
export function createStart({ examples, openExample }, actions) {
  const place = createPastePlace({ label: 'Paste or drop a table', onTable: (text) => actions.setTable(null, text), onOpen: () => actions.chooseFile(null) });
  const element = h(
    'section',
    { class: 'start', 'aria-labelledby': 'start-title' },
    h('h2', { id: 'start-title', class: 'question' }, 'Do the groups differ, and by how much?'),
    h(
      'p',
      {},
      'Paste a table with one row for each observation: a column with the group, a column with what was measured. Say in a sentence what is to be compared; ' +
        'the answer stands below it, settles again with every change, and ends with the words for the paper.',
    ),
    place.element,
    h('h3', {}, 'Or begin otherwise'),
    h(
      'ul',
      { class: 'ways' },
      ...examples.map(({ name, title }) => h('li', {}, h('button', { type: 'button', class: 'linkish', onclick: () => openExample(name) }, title), h('span', {}, ' an example, with invented data'))),
      h('li', {}, h('button', { type: 'button', class: 'linkish', onclick: () => actions.chooseFile(null) }, 'Open a notebook or a table'), h('span', {}, ' .levelwise.toml, .csv, .tsv or .txt')),
      h('li', {}, h('button', { type: 'button', class: 'linkish', onclick: () => actions.add('study', null) }, 'Plan a study'), h('span', {}, ' before there are data')),
    ),
    h(
      'p',
      { class: 'caution' },
      'For clinical or safety decisions this tool supports, and does not replace, a qualified statistician, the study’s approved protocol, local rules and the data-protection office.',
    ),
  );
  return {
    element,
    /** @param {import('./state.js').State} now */
    draw(now) {
      element.hidden = now.engine === 'starting' && now.order.length > 0;
    },
  };
}
