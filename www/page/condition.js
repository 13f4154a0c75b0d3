/** How a cell's condition looks: a shape and a word, and a colour besides. */

import { drawing, h, setText } from './dom.js';

/** @typedef {import('./messages.js').Condition} Condition */

/** @type {Record<Condition, { shape: string, word: string, key: string }>} */
const LOOKS = {
  settled: { shape: 'M3 8.5 6.5 12 13 4.5', word: 'settled', key: 'settled' },
  working: { shape: 'M2 8h2.5M6.8 8h2.5M11.5 8H14', word: 'working', key: 'working' },
  waiting: { shape: 'M5 3v10M11 3v10', word: 'waiting', key: 'waiting' },
  'needs you': { shape: 'M8 2 14.5 13.5h-13zM8 6.5v3.2M8 11.6v.4', word: 'needs you', key: 'needs' },
};

/**
 * A mark that can be told another condition later.
 * @returns {{ element: HTMLElement, draw: (condition: Condition) => void }}
 */
export function conditionMark() {
  const word = h('span');
  const element = h('span', { class: 'condition' });
  /** @type {Condition|null} */
  let shown = null;
  return {
    element,
    draw(condition) {
      if (condition === shown) return;
      shown = condition;
      const look = LOOKS[condition] ?? LOOKS.waiting;
      element.dataset['condition'] = look.key;
      setText(word, look.word);
      element.replaceChildren(drawing(look.shape), word);
    },
  };
}
