/** What the page has to say about itself: a refused request, a file it cannot read, an engine that stopped. */

import { h, setText } from './dom.js';

/** @typedef {import('./state.js').State} State */

/**
 * @param {HTMLElement} element
 * @param {{ dismiss: () => void, restart: () => void, saveKept: () => void }} actions
 */
export function createNotices(element, actions) {
  const words = h('p');
  const notice = h('div', { class: 'notice', role: 'alert', hidden: true }, words, h('button', { type: 'button', class: 'quiet', onclick: actions.dismiss }, 'Dismiss'));
  const stopped = h(
    'div',
    { class: 'notice problem', role: 'alert', hidden: true },
    h('p', {}, 'The engine stopped, twice in a short time. Everything you typed is kept in this page. Save the notebook, or undo what you changed last in a text and start the engine again.'),
    h('button', { type: 'button', onclick: actions.restart }, 'Start the engine again'),
    h('button', { type: 'button', onclick: actions.saveKept }, 'Save the notebook'),
  );
  element.replaceChildren(notice, stopped);
  return {
    /** @param {State} now */
    draw(now) {
      notice.hidden = now.notice === null;
      setText(words, now.notice?.text ?? '');
      notice.classList.toggle('problem', now.notice?.tone === 'problem');
      stopped.hidden = now.engine !== 'stopped';
    },
  };
}
