/** The privacy line, always in sight, how to check that it is true, and whose work the page holds. */

import { licences } from './blocks.js';
import { h } from './dom.js';

/** @param {HTMLElement} element */
export function createPrivacy(element) {
  const dialog = h(
    'dialog',
    { class: 'sheet', 'aria-labelledby': 'privacy-title' },
    h('h2', { id: 'privacy-title', tabIndex: -1, autofocus: true }, 'How to check that nothing is sent'),
    h('p', {}, 'The page is one file with everything in it. It computes here, in this browser, and its security policy tells the browser to refuse every connection: no server, no account, no fonts or scripts from elsewhere.'),
    h('ol', {},
      h('li', {}, 'Take the machine off the network, or open the file from a memory stick. Everything works as before.'),
      h('li', {}, 'Open the browser’s developer tools (F12), choose the network panel and work: after the page itself, no request appears.'),
      h('li', {}, 'Look at the source of the page: the line “Content-Security-Policy” near its top says default-src ‘none’ and connect-src ‘none’. The browser enforces it, whatever the page’s code does; a changed script does not run at all.'),
    ),
    h('p', {}, 'A policy cannot stop a browser from following a link to another page, so this page has none. It keeps nothing in the browser either: what you do not save is gone when you close it. Files that you save are yours to look after.'),
    h('p', { class: 'answers' }, h('button', { type: 'button', onclick: () => dialog.close() }, 'Close'), h('button', { type: 'button', class: 'quiet', onclick: () => showLicences() }, 'Licences of what is inside')),
  );
  const button = h('button', { type: 'button', class: 'quiet', onclick: () => dialog.showModal() }, 'How to check');
  const words = h('pre', { tabIndex: 0, role: 'region', 'aria-label': 'Texts of the licences' });
  const notices = h(
    'dialog',
    { class: 'sheet wide', 'aria-labelledby': 'licences-title' },
    h('h2', { id: 'licences-title', tabIndex: -1, autofocus: true }, 'Licences'),
    h('p', {}, 'Levelwise is under the MIT licence. These are the licences of everything inside this file; they are part of it, so they can be read without a network.'),
    words,
    h('p', { class: 'answers' }, h('button', { type: 'button', onclick: () => notices.close() }, 'Close')),
  );
  const showLicences = () => {
    words.textContent = licences();
    notices.showModal();
  };
  element.replaceChildren(h('p', {}, h('strong', {}, 'This page cannot send anything'), h('span', { class: 'reason' }, ': its security policy forbids every connection'), '. ', button, ' ', h('button', { type: 'button', class: 'quiet licences', onclick: showLicences }, 'Licences')), dialog, notices);
}
