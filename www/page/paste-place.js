/** The visible place that takes a table: pasted from a spreadsheet, dropped as a file or typed. */

import { h } from './dom.js';
import { looksLikeTable } from './tables.js';

const INVITATION = 'Paste a table here, its first row the names of the columns, or drop a file';

/**
 * @param {{ label: string, onTable: (text: string) => void, onOpen: () => void }} parts
 */
export function createPastePlace({ label, onTable, onOpen }) {
  const area = h('textarea', { rows: 3, spellcheck: false, placeholder: INVITATION, 'aria-label': label });
  const use = h('button', { type: 'button', hidden: true, onclick: () => take(area.value) }, 'Use this table');
  const file = h('button', { type: 'button', class: 'quiet', onclick: onOpen }, 'Choose a file…');
  const element = h('div', { class: 'paste-place' }, area, h('p', { class: 'paste-tools' }, use, file));

  /** @param {string} text */
  function take(text) {
    if (text.trim() === '') return;
    area.value = '';
    use.hidden = true;
    onTable(text);
  }
  area.addEventListener('paste', (event) => {
    const text = event.clipboardData?.getData('text/plain') ?? '';
    if (!looksLikeTable(text) || area.value.trim() !== '') return;
    event.preventDefault();
    take(text);
  });
  area.addEventListener('input', () => {
    use.hidden = area.value.trim() === '';
  });
  return {
    element,
    area,
    /**
     * What the empty place says.
     * @param {boolean} kept whether there is a table already, which cannot be read as it is
     */
    draw(kept) {
      area.placeholder = kept ? 'Your table is kept in the text of this cell, where it can be corrected. A corrected table pasted here replaces it.' : INVITATION;
    },
  };
}
