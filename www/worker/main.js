/**
 * The worker's side of the page: it owns one engine and nothing else.
 *
 * `start` brings the compiled module; every later message is a request. Long work is done in slices, and between
 * two slices the worker goes back to its queue, so that a newer edit is heard before the next slice begins.
 */

/** @typedef {import('../page/messages.js').NumberedRequest} NumberedRequest */
/** @typedef {{ type: 'start', module: WebAssembly.Module }} Start */

/** @type {Session|null} */
let session = null;
let pending = false;

/** What the engine last said about a failure of its own. */
let lastWords = '';
const say = console.error;
console.error = (...words) => {
  lastWords = words.map(String).join(' ');
  say(...words);
};

const turn = new MessageChannel();
turn.port1.onmessage = slice;

/** @param {unknown} message */
function post(message) {
  self.postMessage(message);
}

/** Asks for another slice, after whatever the queue holds now. */
function nextSlice() {
  if (pending) return;
  pending = true;
  turn.port2.postMessage(null);
}

function slice() {
  pending = false;
  attempt(() => {
    if (session && session.advance()) nextSlice();
  });
}

/**
 * Runs a step; an engine that has failed is not used again.
 * @param {() => void} step
 */
function attempt(step) {
  try {
    step();
  } catch (error) {
    session = null;
    post({ type: 'failed', message: lastWords || (error instanceof Error ? error.message : String(error)) });
    self.close();
  }
}

/** @param {MessageEvent<Start | NumberedRequest>} event */
self.onmessage = (event) => {
  const message = event.data;
  attempt(() => {
    if (message.type === 'start') {
      wasm_bindgen.initSync({ module: message.module });
      session = new wasm_bindgen.Session(post);
    } else if (session) {
      session.handle(message);
    }
    nextSlice();
  });
};
