/**
 * The text face, read when there is time for it or when it is first opened: its editor is half of the page's script, and
 * the answers come first.
 */

/** @typedef {typeof import('./text.js').createTextFace} CreateTextFace */

/** @type {CreateTextFace|null} */
let face = null;

/** What makes a text face; null until it has been read. */
export const textFaceMaker = () => face;

/** Reads it. @returns {Promise<CreateTextFace>} */
export async function readTextFace() {
  face ??= (await import('./text.js')).createTextFace;
  return face;
}
