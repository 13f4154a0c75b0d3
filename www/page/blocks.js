/** The data blocks of the file: the engine, the worker's source, the examples and the licences. */

/** @typedef {{ name: string, title: string, text: string }} Example */

/** @param {string} id */
function block(id) {
  const element = document.getElementById(id);
  if (!element) throw new Error(`This file is not complete: its part "${id}" is missing. Fetch it again from where you got it.`);
  return element.textContent ?? '';
}

/**
 * @param {string} base64
 * @returns {Uint8Array<ArrayBuffer>}
 */
function bytesOf(base64) {
  /** @type {{ fromBase64?: (text: string) => Uint8Array<ArrayBuffer> }} */
  const modern = /** @type {any} */ (Uint8Array);
  if (modern.fromBase64) return modern.fromBase64(base64.trim());
  return Uint8Array.from(atob(base64.trim()), (letter) => letter.charCodeAt(0));
}

/** The engine, compiled; each worker makes its own instance of it. */
export async function compiledEngine() {
  const packed = new Blob([bytesOf(block('engine'))]);
  const plain = packed.stream().pipeThrough(new DecompressionStream('gzip'));
  return WebAssembly.compileStreaming(new Response(plain, { headers: { 'Content-Type': 'application/wasm' } }));
}

/** The worker's source, as script text. */
export function workerSource() {
  return block('worker').replaceAll('<\\/script', '</script');
}

/** The licences of everything inside this file. */
export function licences() {
  return block('licences').replaceAll(/<\\(?=\/script|!--)/gi, '<');
}

/**
 * The example notebooks in this file.
 * @returns {Example[]}
 */
export function examples() {
  return JSON.parse(new TextDecoder().decode(bytesOf(block('examples'))));
}
