/** One question to the person, in a dialog of the page. */

import { h } from './dom.js';

/**
 * The value of the button that was chosen; "" when the dialog was left.
 * @param {string} question
 * @param {readonly { value: string, label: string }[]} answers
 * @returns {Promise<string>}
 */
export function ask(question, answers) {
  return new Promise((resolve) => {
    const dialog = h('dialog', { class: 'sheet', 'aria-label': question }, h('p', {}, question));
    const close = (/** @type {string} */ value) => {
      dialog.close();
      dialog.remove();
      resolve(value);
    };
    dialog.append(h('p', { class: 'answers' }, ...answers.map(({ value, label }) => h('button', { type: 'button', onclick: () => close(value) }, label))));
    dialog.addEventListener('cancel', (event) => {
      event.preventDefault();
      close('');
    });
    document.body.append(dialog);
    dialog.showModal();
  });
}
