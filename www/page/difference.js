/** The one stretch in which two texts differ. */

/**
 * The smallest single replacement that turns `before` into `after`; null if they are the same. Surrogate pairs stay whole.
 * @param {string} before
 * @param {string} after
 * @returns {{ from: number, to: number, insert: string }|null}
 */
export function difference(before, after) {
  if (before === after) return null;
  const shortest = Math.min(before.length, after.length);
  let from = 0;
  while (from < shortest && before.charCodeAt(from) === after.charCodeAt(from)) from += 1;
  if (from > 0 && isHighHalf(before.charCodeAt(from - 1))) from -= 1;
  let tail = 0;
  while (tail < shortest - from && before.charCodeAt(before.length - 1 - tail) === after.charCodeAt(after.length - 1 - tail)) tail += 1;
  if (tail > 0 && isLowHalf(before.charCodeAt(before.length - tail))) tail -= 1;
  return { from, to: before.length - tail, insert: after.slice(from, after.length - tail) };
}

/** @param {number} unit */
function isHighHalf(unit) {
  return unit >= 0xd800 && unit < 0xdc00;
}

/** @param {number} unit */
function isLowHalf(unit) {
  return unit >= 0xdc00 && unit < 0xe000;
}
