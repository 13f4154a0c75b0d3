/** Where the spaces of a sentence go: its parts come without. */

/** @typedef {import('./messages.js').Part} Part */

/**
 * The words that stand before each part and after the last one, with their spaces: `blanks[i]` stands between `words[i]` and
 * `words[i + 1]`. There is always one stretch of words more than there are blanks.
 * @param {readonly Part[]} parts
 * @returns {{ words: string[], blanks: import('./messages.js').Blank[] }}
 */
export function spaced(parts) {
  const words = [''];
  /** @type {import('./messages.js').Blank[]} */
  const blanks = [];
  for (const part of parts) {
    const before = words.at(-1) ?? '';
    const atStart = blanks.length === 0 && before === '';
    if (part.type === 'blank') {
      words[words.length - 1] = atStart || /\s$/.test(before) ? before : `${before} `;
      blanks.push(part);
      words.push('');
    } else {
      const gap = atStart || /\s$/.test(before) || /^[\s,.;:?!)]/.test(part.text) ? '' : ' ';
      words[words.length - 1] = before + gap + part.text;
    }
  }
  return { words, blanks };
}
