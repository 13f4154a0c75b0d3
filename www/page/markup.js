/**
 * Which markup the page takes from the engine.
 *
 * The engine writes plain, well-formed HTML and SVG: lower-case tags, attributes in double quotes. Everything is read here
 * before the browser sees it, and what is not on the list of elements, or could fetch, run or lead away, is refused as a
 * whole. The page's policy would stop most of it too; a bare connection by `link` or `iframe`, it would not.
 */

const ELEMENTS = new Set(
  ('a abbr article aside b blockquote br caption code col colgroup dd del details dfn div dl dt em figcaption figure h1 h2 h3 h4 h5 h6 hr i ' +
    'ins kbd li mark ol p pre q s samp section small span strong sub summary sup table tbody td tfoot th thead time tr u ul var wbr ' +
    'svg g path line rect circle ellipse polyline polygon text tspan title desc defs clippath marker symbol use lineargradient stop').split(' '),
);

const REFUSED_ATTRIBUTES = new Set(
  'style src srcset srcdoc action formaction ping background poster data lowsrc dynsrc cite target download nonce autofocus contenteditable'.split(' '),
);

const COMMENT = /<!--[^]*?-->/y;
const TAG = /<(\/?)([A-Za-z][A-Za-z0-9]*)((?:\s+[A-Za-z_:][-A-Za-z0-9_:.]*(?:="[^"<]*")?)*)\s*\/?>/y;
const ATTRIBUTE = /([A-Za-z_:][-A-Za-z0-9_:.]*)(?:="([^"]*)")?/g;

/**
 * What is wrong with the markup, in a few words; null if nothing is.
 * @param {string} html
 * @returns {string|null}
 */
export function objection(html) {
  let at = html.indexOf('<');
  while (at >= 0) {
    COMMENT.lastIndex = at;
    TAG.lastIndex = at;
    const tag = TAG.exec(html);
    if (tag) {
      const found = objectionToTag((tag[2] ?? '').toLowerCase(), tag[3] ?? '');
      if (found) return found;
      at = TAG.lastIndex;
    } else if (COMMENT.test(html)) {
      at = COMMENT.lastIndex;
    } else {
      return `markup that cannot be read: ${html.slice(at, at + 40)}`;
    }
    at = html.indexOf('<', at);
  }
  return null;
}

/**
 * @param {string} name
 * @param {string} attributes
 * @returns {string|null}
 */
function objectionToTag(name, attributes) {
  if (!ELEMENTS.has(name)) return `an element <${name}>`;
  for (const [, attribute = '', value = ''] of attributes.matchAll(ATTRIBUTE)) {
    const key = attribute.toLowerCase();
    if (key.startsWith('on') || REFUSED_ATTRIBUTES.has(key)) return `an attribute "${key}"`;
    if ((key === 'href' || key.endsWith(':href')) && !value.startsWith('#')) return `an address "${value.slice(0, 40)}"`;
    if (/url\s*\((?!\s*['"]?#)/i.test(value)) return `an address in "${key}"`;
  }
  return null;
}
