/**
 * The notebook's text as the page keeps it, so that a failed engine loses nothing. The file is a few lines and then one
 * `[[cell]]` after the other; the engine alone reads and writes it otherwise.
 */

/** @typedef {import('./messages.js').CellView} CellView */

/**
 * The lines of a notebook file that stand before its first cell.
 * @param {string} file
 */
export function preambleOf(file) {
  const first = file.search(/^[ \t]*\[\[cell\]\]/m);
  return first < 0 ? '' : file.slice(0, first).replace(/^\uFEFF/, '').trimEnd();
}

/**
 * A notebook file that holds the cells' texts, word for word.
 * @param {string} preamble
 * @param {readonly Pick<CellView, 'text'>[]} cells
 */
export function notebookFile(preamble, cells) {
  const head = preamble || 'levelwise = 1';
  return [head, ...cells.map((cell) => `\n[[cell]]\n${cell.text.trimEnd()}`)].join('\n') + '\n';
}
