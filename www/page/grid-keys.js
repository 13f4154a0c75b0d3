/** Where a key leads in a grid. */

/** @typedef {{ row: number, column: number }} Place */

/**
 * The place that a key moves to, or null if it is not a key that moves.
 * @param {{ key: string, ctrlKey: boolean, metaKey: boolean, altKey: boolean }} event
 * @param {Place} from
 * @param {{ rows: number, columns: number, page: number }} size
 * @returns {Place|null}
 */
export function moved(event, from, size) {
  if (event.altKey) return null;
  const { row, column } = from;
  const far = event.ctrlKey || event.metaKey;
  const last = { row: size.rows - 1, column: size.columns - 1 };
  switch (event.key) {
    case 'ArrowUp':
      return { row: far ? 0 : Math.max(0, row - 1), column };
    case 'ArrowDown':
      return { row: far ? last.row : Math.min(last.row, row + 1), column };
    case 'ArrowLeft':
      return { row, column: far ? 0 : Math.max(0, column - 1) };
    case 'ArrowRight':
      return { row, column: far ? last.column : Math.min(last.column, column + 1) };
    case 'Home':
      return { row: far ? 0 : row, column: 0 };
    case 'End':
      return { row: far ? last.row : row, column: last.column };
    case 'PageUp':
      return { row: Math.max(0, row - size.page), column };
    case 'PageDown':
      return { row: Math.min(last.row, row + size.page), column };
    default:
      return null;
  }
}
