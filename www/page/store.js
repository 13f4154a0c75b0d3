/** One value, and those who want to know when it is replaced. */

/**
 * @template T
 * @typedef {object} Store
 * @property {() => T} get
 * @property {(change: (value: T) => T) => void} update
 * @property {(listener: (value: T) => void) => void} subscribe
 */

/**
 * A store that holds `value`. Listeners hear of a replacement once, after the code that made it has ended; several
 * replacements in one go are heard as one.
 * @template T
 * @param {T} value
 * @returns {Store<T>}
 */
export function createStore(value) {
  /** @type {((value: T) => void)[]} */
  const listeners = [];
  let announced = true;
  const announce = () => {
    announced = true;
    for (const listener of listeners) listener(value);
  };
  return {
    get: () => value,
    update(change) {
      const next = change(value);
      if (next === value) return;
      value = next;
      if (!announced) return;
      announced = false;
      queueMicrotask(announce);
    },
    subscribe(listener) {
      listeners.push(listener);
    },
  };
}
