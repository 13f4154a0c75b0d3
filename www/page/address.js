/** What the page's own address asks for. */

/**
 * The example named in the address: `#example` for the first, `#example=NAME` for a certain one; null if none.
 * @param {string} hash
 * @returns {string|null}
 */
export function exampleAsked(hash) {
  const found = /^#example(?:=(.*))?$/.exec(hash);
  if (!found) return null;
  try {
    return decodeURIComponent(found[1] ?? '');
  } catch {
    return '';
  }
}
