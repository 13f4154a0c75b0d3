/**
 * From scroll position to rows and back. Browsers limit how tall an element can be, so beyond the cap one pixel of
 * scrolling stands for more than one pixel of rows.
 */

export const TALLEST = 8_000_000;

/** @typedef {{ total: number, rowHeight: number, viewHeight: number }} Extent `viewHeight` is what the rows have of the window */

/**
 * The height of the element that holds all rows, in pixels.
 * @param {Extent} extent
 */
export function bodyHeight({ total, rowHeight }) {
  return Math.min(total * rowHeight, TALLEST);
}

/**
 * How many pixels of rows one pixel of scrolling stands for.
 * @param {Extent} extent
 */
function ratio(extent) {
  const room = bodyHeight(extent) - extent.viewHeight;
  return room > 0 ? Math.max(1, (extent.total * extent.rowHeight - extent.viewHeight) / room) : 1;
}

/**
 * The first row to draw, how many, and where the first one stands inside the tall element.
 * @param {Extent} extent
 * @param {number} scrollTop
 * @returns {{ first: number, count: number, top: number }}
 */
export function visibleRows(extent, scrollTop) {
  const { total, rowHeight, viewHeight } = extent;
  const virtualTop = Math.max(0, scrollTop) * ratio(extent);
  const fits = Math.ceil(viewHeight / rowHeight) + 1;
  const first = Math.max(0, Math.min(Math.floor(virtualTop / rowHeight), total - fits + 1));
  const count = Math.min(fits, total - first);
  return { first, count, top: scrollTop - (virtualTop - first * rowHeight) };
}

/**
 * The scroll position that brings `row` into view with the least movement.
 * @param {Extent} extent
 * @param {number} scrollTop
 * @param {number} row
 */
export function scrollToRow(extent, scrollTop, row) {
  const scale = ratio(extent);
  const virtualTop = scrollTop * scale;
  const rowTop = row * extent.rowHeight;
  const rowBottom = rowTop + extent.rowHeight;
  if (rowTop < virtualTop) return rowTop / scale;
  if (rowBottom > virtualTop + extent.viewHeight) return (rowBottom - extent.viewHeight) / scale;
  return scrollTop;
}
