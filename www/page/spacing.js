/** Where the spaces of a sentence go: its parts come without. */

/** @typedef {import('./messages.js').Part} Part */

/**
 * The words that stand before each blank and after the last one, with their spaces: `blanks[i]` and then `tails[i]` stand
 * between `words[i]` and `words[i + 1]`. A tail is the punctuation that must not begin a line of its own. There is always one
 * stretch of words more than there are blanks.
 * @param {readonly Part[]} parts
 * @returns {{ words: string[], blanks: import('./messages.js').Blank[], tails: string[] }}
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
  const tails = blanks.map((_, i) => /^[,.;:?!)]*/.exec(words[i + 1] ?? '')?.[0] ?? '');
  tails.forEach((tail, i) => {
    words[i + 1] = (words[i + 1] ?? '').slice(tail.length);
  });
  return { words, blanks, tails };
}
