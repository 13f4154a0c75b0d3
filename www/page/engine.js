/**
 * The page's side of the worker: requests out, messages in, and a fresh worker when one has failed.
 */

import { workerFrom } from './policy.js';

/** @typedef {import('./messages.js').Message} Message */
/** @typedef {import('./messages.js').Request} Request */

/**
 * @typedef {object} Engine
 * @property {(request: Request) => number} send the request's number
 * @property {() => void} restart
 */

/**
 * An engine that starts at once.
 * @param {{ source: string, module: WebAssembly.Module, onMessage: (message: Message) => void, onFailure: (words: string) => void }} parts
 * @returns {Engine}
 */
export function createEngine({ source, module, onMessage, onFailure }) {
  let seq = 0;
  /** @type {Worker|null} */
  let worker = null;

  /**
   * @param {Worker} failed
   * @param {string} words
   */
  function fail(failed, words) {
    if (failed !== worker) return;
    failed.terminate();
    worker = null;
    onFailure(words);
  }

  function start() {
    worker?.terminate();
    const fresh = workerFrom(source);
    worker = fresh;
    fresh.onmessage = (/** @type {MessageEvent<Message>} */ event) => {
      if (fresh !== worker) return;
      if (event.data.type === 'failed') fail(fresh, event.data.message);
      else onMessage(event.data);
    };
    fresh.onerror = (event) => {
      event.preventDefault();
      fail(fresh, event.message ?? 'The worker did not start.');
    };
    fresh.onmessageerror = () => fail(fresh, 'A message could not be read.');
    fresh.postMessage({ type: 'start', module });
  }

  start();
  return {
    send(request) {
      seq += 1;
      worker?.postMessage({ ...request, seq });
      return seq;
    },
    restart: start,
  };
}
