/**
 * The page's side of the worker: requests out, messages in, and a fresh worker when one has failed.
 */

import { workerFrom } from './policy.js';

/** @typedef {import('./messages.js').Message} Message */
/** @typedef {import('./messages.js').Request} Request */

/** @typedef {{ source: string, module: WebAssembly.Module }} Program */

/**
 * @typedef {object} Engine
 * @property {(request: Request) => number} send the request's number
 * @property {(source: string) => void} prepare starts the worker's own script, which takes its time, before the engine is compiled
 * @property {(program: Program) => void} start
 * @property {() => void} restart
 */

/**
 * An engine that can be asked at once; requests wait until it is started.
 * @param {{ onMessage: (message: Message) => void, onFailure: (words: string) => void }} parts
 * @returns {Engine}
 */
export function createEngine({ onMessage, onFailure }) {
  let seq = 0;
  /** @type {Program|null} */
  let program = null;
  /** What was asked before the start. @type {object[]} */
  let early = [];
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

  /** @param {string} source */
  function newWorker(source) {
    const fresh = workerFrom(source);
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
    return fresh;
  }

  function restart() {
    if (!program) return;
    worker?.terminate();
    worker = newWorker(program.source);
    worker.postMessage({ type: 'start', module: program.module });
  }

  return {
    send(request) {
      seq += 1;
      const numbered = { ...request, seq };
      if (program) worker?.postMessage(numbered);
      else early.push(numbered);
      return seq;
    },
    prepare(source) {
      worker ??= newWorker(source);
    },
    start(ready) {
      program = ready;
      if (worker) worker.postMessage({ type: 'start', module: program.module });
      else restart();
      for (const request of early) worker?.postMessage(request);
      early = [];
    },
    restart,
  };
}
