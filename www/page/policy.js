/** The page's only way past Trusted Types, and the doors that no policy closes. */

import { objection } from './markup.js';

/**
 * @typedef {{ createHTML(html: string): string, createScriptURL(url: string): string }} Policy
 */

const rules = {
  /** @param {string} html */
  createHTML(html) {
    const found = objection(html);
    if (found) throw new TypeError(`The answer holds ${found}, which this page does not show.`);
    return html;
  },
  /** @param {string} url */
  createScriptURL(url) {
    if (!url.startsWith('blob:')) throw new TypeError('A worker starts from this page only.');
    return url;
  },
};

/** @type {{ trustedTypes?: { createPolicy(name: string, rules: Policy): Policy } }} */
const scope = /** @type {any} */ (globalThis);

/** @type {Policy} */
const policy = scope.trustedTypes ? scope.trustedTypes.createPolicy('app', rules) : rules;

/**
 * Shows the engine's markup in `element`; markup that is not what the engine writes is shown as text, with the reason.
 * @param {Element} element
 * @param {string} html
 */
export function showMarkup(element, html) {
  try {
    element.innerHTML = policy.createHTML(html);
  } catch (error) {
    element.textContent = `${error instanceof Error ? error.message : String(error)} ${html}`;
  }
}

/**
 * A worker that runs `source`.
 * @param {string} source
 * @returns {Worker}
 */
export function workerFrom(source) {
  const url = URL.createObjectURL(new Blob([source], { type: 'text/javascript' }));
  const worker = new Worker(policy.createScriptURL(url));
  // The address must live until the worker has read it, which the browser does not report.
  setTimeout(() => URL.revokeObjectURL(url), 60_000);
  return worker;
}

/** Takes away the one facility that could open a connection and that no policy forbids. */
export function closeDoors() {
  for (const name of ['RTCPeerConnection', 'webkitRTCPeerConnection', 'RTCDataChannel']) {
    Reflect.deleteProperty(globalThis, name);
  }
}
