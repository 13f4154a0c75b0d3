/** Cells and their kinds in words. What each kind is for, the engine says. */

/** @typedef {import('./messages.js').Kind} Kind */

/** The word above a cell whose text does not say a kind that the engine knows. */
const UNKNOWN = 'Cell';

/**
 * The heading word of a kind.
 * @param {Kind|null} kind
 */
export function kindTitle(kind) {
  return kind ? kind.charAt(0).toUpperCase() + kind.slice(1) : UNKNOWN;
}

/**
 * A cell in a few words, for button names and messages.
 * @param {{ kind: Kind|null, name: string|null }} cell
 */
export function cellTitle(cell) {
  return cell.name ? `${kindTitle(cell.kind)} “${cell.name}”` : kindTitle(cell.kind);
}
