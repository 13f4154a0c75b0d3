/** Answers taken elsewhere: text and tables to the clipboard, figures to files. */

import { h } from './dom.js';
import { tabSeparated } from './tables.js';

/**
 * Puts text, and the same as HTML if given, on the clipboard. From a file on disk the newer way may be closed; the older
 * one, by a selection, is then used.
 * @param {string} text
 * @param {string} [html]
 * @returns {Promise<boolean>} whether it worked
 */
export async function copy(text, html) {
  try {
    const types = { 'text/plain': new Blob([text], { type: 'text/plain' }), ...(html && { 'text/html': new Blob([html], { type: 'text/html' }) }) };
    await navigator.clipboard.write([new ClipboardItem(types)]);
    return true;
  } catch {
    return copyBySelection(text, html);
  }
}

/**
 * @param {string} text
 * @param {string} [html]
 */
function copyBySelection(text, html) {
  const active = document.activeElement;
  const carrier = h('textarea', { value: text, class: 'unseen', 'aria-hidden': 'true', tabIndex: -1 });
  document.body.append(carrier);
  carrier.select();
  /** @param {ClipboardEvent} event */
  const onCopy = (event) => {
    event.preventDefault();
    event.clipboardData?.setData('text/plain', text);
    if (html) event.clipboardData?.setData('text/html', html);
  };
  document.addEventListener('copy', onCopy);
  const done = document.execCommand('copy');
  document.removeEventListener('copy', onCopy);
  carrier.remove();
  if (active instanceof HTMLElement) active.focus();
  return done;
}

/**
 * Copies a table so that a word processor takes it as a table and a spreadsheet as cells.
 * @param {HTMLTableElement} table
 */
export function copyTable(table) {
  const rows = [...table.rows].map((row) => [...row.cells].flatMap((cell) => [visibleText(cell), ...Array(cell.colSpan - 1).fill('')]));
  const caption = table.caption?.textContent?.trim();
  return copy((caption ? `${caption}\n` : '') + tabSeparated(rows), plainTable(table));
}

/**
 * What the eye sees in a table's cell: words for those who hear the page stay out.
 * @param {HTMLElement} cell
 */
function visibleText(cell) {
  const clone = /** @type {HTMLElement} */ (cell.cloneNode(true));
  for (const unseen of clone.querySelectorAll('.a-unseen')) unseen.remove();
  return clone.textContent ?? '';
}

/**
 * The table without classes and controls, with the few attributes that word processors understand.
 * @param {HTMLTableElement} table
 */
function plainTable(table) {
  const clone = /** @type {HTMLTableElement} */ (table.cloneNode(true));
  for (const unseen of clone.querySelectorAll('.a-unseen')) unseen.remove();
  for (const element of [clone, ...clone.querySelectorAll('*')]) {
    for (const { name } of [...element.attributes]) if (!/^(colspan|rowspan|scope)$/.test(name)) element.removeAttribute(name);
  }
  clone.setAttribute('border', '1');
  return new XMLSerializer().serializeToString(clone).replace(/ xmlns="[^"]*"/, '');
}

/**
 * Hands a file to the person.
 * @param {string} name
 * @param {Blob} content
 */
export function download(name, content) {
  const url = URL.createObjectURL(content);
  h('a', { href: url, download: name }).click();
  setTimeout(() => URL.revokeObjectURL(url), 60_000);
}

/**
 * A figure as a file of its own. The engine's drawings carry their colours for paper in themselves, so what is saved is
 * the same in the page's light and dark.
 * @param {SVGSVGElement} svg
 * @returns {{ text: string, width: number, height: number }}
 */
function standalone(svg) {
  const clone = /** @type {SVGSVGElement} */ (svg.cloneNode(true));
  const { width, height } = svg.viewBox.baseVal;
  clone.setAttribute('width', String(width));
  clone.setAttribute('height', String(height));
  return { text: new XMLSerializer().serializeToString(clone), width, height };
}

/**
 * Saves a figure as a drawing.
 * @param {SVGSVGElement} svg
 * @param {string} name
 */
export function saveSvg(svg, name) {
  download(`${name}.svg`, new Blob([standalone(svg).text], { type: 'image/svg+xml' }));
}

/**
 * Saves a figure as a picture, three times as fine as the screen's pixels: about 300 dots to the inch in print.
 * @param {SVGSVGElement} svg
 * @param {string} name
 */
export async function savePng(svg, name) {
  const { text, width, height } = standalone(svg);
  const url = URL.createObjectURL(new Blob([text], { type: 'image/svg+xml' }));
  try {
    const image = new Image();
    image.src = url;
    await image.decode();
    const canvas = h('canvas', { width: Math.round(width * 3), height: Math.round(height * 3) });
    canvas.getContext('2d')?.drawImage(image, 0, 0, canvas.width, canvas.height);
    const blob = await new Promise((/** @type {(blob: Blob|null) => void} */ resolve) => canvas.toBlob(resolve, 'image/png'));
    if (blob) download(`${name}.png`, blob);
    return blob !== null;
  } finally {
    URL.revokeObjectURL(url);
  }
}
