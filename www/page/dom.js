/** Making elements, and nothing more. */

/** @typedef {Node|string|null|undefined|false} Child */

/**
 * An element with the given properties and children. `class`, `for`, `role`, `aria-*` and `data-*` are set as attributes,
 * functions under `on…` are listened with, everything else is assigned as a property.
 * @template {keyof HTMLElementTagNameMap} K
 * @param {K} tag
 * @param {Record<string, unknown>} [properties]
 * @param {...Child} children
 * @returns {HTMLElementTagNameMap[K]}
 */
export function h(tag, properties = {}, ...children) {
  const element = document.createElement(tag);
  for (const [key, value] of Object.entries(properties)) {
    if (value === undefined || value === null) continue;
    if (key.startsWith('on') && typeof value === 'function') {
      element.addEventListener(key.slice(2), /** @type {EventListener} */ (value));
    } else if (/^(class|for|role|list|aria-.*|data-.*)$/.test(key)) {
      element.setAttribute(key, String(value));
    } else {
      Reflect.set(element, key, value);
    }
  }
  element.append(...children.filter((child) => child !== null && child !== undefined && child !== false));
  return element;
}

/**
 * Makes `parent` hold exactly `children`, moving only what has to move, so that what stays keeps its focus and scroll.
 * @param {Element} parent
 * @param {readonly Node[]} children
 */
export function arrange(parent, children) {
  const wanted = new Set(children);
  for (const node of [...parent.childNodes]) if (!wanted.has(node)) node.remove();
  children.forEach((child, i) => {
    if (parent.childNodes[i] !== child) parent.insertBefore(child, parent.childNodes[i] ?? null);
  });
}

/**
 * Sets text only where it differs: a live region is read out for every change.
 * @param {Node} node
 * @param {string} text
 */
export function setText(node, text) {
  if (node.textContent !== text) node.textContent = text;
}

/**
 * A small drawing of strokes on a 16 by 16 field, hidden from those who hear the page.
 * @param {string} path
 * @param {string} [className]
 */
export function drawing(path, className = 'icon') {
  const svg = document.createElementNS('http://www.w3.org/2000/svg', 'svg');
  svg.setAttribute('viewBox', '0 0 16 16');
  svg.setAttribute('class', className);
  svg.setAttribute('aria-hidden', 'true');
  const shape = document.createElementNS('http://www.w3.org/2000/svg', 'path');
  shape.setAttribute('d', path);
  svg.append(shape);
  return svg;
}

let counter = 0;

/**
 * An id that no other element has.
 * @param {string} word
 */
export function freshId(word) {
  counter += 1;
  return `${word}-${counter}`;
}
