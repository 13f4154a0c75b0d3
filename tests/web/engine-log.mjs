/**
 * Listens in on what the page and its engine say to each other, so that a test can wait until an edit has settled and
 * can ask which cells were recomputed.
 */

/** @typedef {import('puppeteer-core').Page} Page */

/**
 * @typedef {object} Entry
 * @property {number} at milliseconds on the page's clock, which starts when the page is asked for
 * @property {'request'|'message'} way
 * @property {string} type
 * @property {number} [seq]
 * @property {boolean} [settled]
 * @property {number[]} [recomputed]
 * @property {{ id: number, kind: string, name: string|null, condition: string, headline: string, answered: boolean }[]} [cells]
 */

/**
 * Has to be called before the page is opened.
 * @param {Page} page
 */
export async function recordEngine(page) {
  await page.evaluateOnNewDocument(() => {
    /** @type {any[]} */
    const log = [];
    Object.defineProperty(window, 'engineLog', { value: log });
    window.Worker = class extends Worker {
      /** @param {string|URL} url */
      constructor(url) {
        super(url);
        this.addEventListener('message', ({ data }) => {
          const { type, seq, settled, recomputed } = data;
          const cells = data.cells?.map((/** @type {any} */ { id, kind, name, condition, headline, answer }) => ({ id, kind, name, condition, headline, answered: answer !== '' }));
          log.push({ at: performance.now(), way: 'message', type, seq, settled, recomputed, cells });
        });
      }
      /** @param {[any, any]} parts */
      postMessage(...parts) {
        log.push({ at: performance.now(), way: 'request', type: parts[0].type, seq: parts[0].seq });
        super.postMessage(...parts);
      }
    };
  });
}

/**
 * How many entries there are so far: where the next ones begin.
 * @param {Page} page
 * @returns {Promise<number>}
 */
export function position(page) {
  return page.evaluate(() => /** @type {any} */ (window).engineLog.length);
}

/**
 * The entries from `since` on, once an edit made there has settled: a request that is not just for rows in sight, and
 * after it an update that answers it with nothing left to compute.
 * @param {Page} page
 * @param {number} since
 * @param {number} [timeout] milliseconds
 * @returns {Promise<Entry[]>}
 */
export async function settled(page, since, timeout = 30_000) {
  await page.waitForFunction(
    (from) => {
      /** @type {any[]} */
      const entries = /** @type {any} */ (window).engineLog.slice(from);
      const requests = entries.filter((entry) => entry.way === 'request' && !['rows', 'start', 'save', 'report'].includes(entry.type));
      const last = requests.at(-1)?.seq;
      return last !== undefined && entries.some((entry) => entry.type === 'update' && entry.settled && entry.seq >= last);
    },
    { timeout, polling: 10 },
    since,
  );
  return page.evaluate((from) => /** @type {any} */ (window).engineLog.slice(from), since);
}

/**
 * The cells that were recomputed, each once, sorted.
 * @param {Entry[]} entries
 */
export function recomputed(entries) {
  return [...new Set(entries.flatMap((entry) => entry.recomputed ?? []))].sort((a, b) => a - b);
}
