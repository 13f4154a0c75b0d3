/**
 * Times the built page in a browser, as a person would feel it, and prints medians.
 *
 * - open to first answer: from asking for the file, in a browser just started, to the first computed answer on the screen;
 * - keystroke to settled: from pressing a key to the screen that shows every answer that depends on it.
 *   The key either confirms a changed value in the table, so that everything is computed anew, or chooses another
 *   adjustment in the sentence of the comparisons, so that only they are.
 *
 * The tables are made up by a fixed rule: five groups of equal size, values with two decimals.
 */

import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { position, settled } from '../web/engine-log.mjs';
import { openPage } from '../web/harness.mjs';

const REPEATS = Number(process.env.REPEATS ?? 9);
const ROWS = [1_000, 100_000];
const folder = mkdtempSync(join(tmpdir(), 'levelwise-bench-'));

/** @param {number} rows */
function notebook(rows) {
  const levels = ['0 mg', '5 mg', '10 mg', '20 mg', '40 mg'];
  let state = 20261201;
  // A linear congruential generator: the low bits are poor, so only the high ones are used.
  const uniform = () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return state / 2 ** 32;
  };
  const lines = ['dose,score'];
  for (let row = 0; row < rows; row += 1) {
    const level = row % levels.length;
    const spread = uniform() + uniform() + uniform() + uniform() - 2;
    lines.push(`${levels[level]},${(50 + level + 8 * spread).toFixed(2)}`);
  }
  return `levelwise = 1

[[cell]]
kind = "data"
name = "table"
table = """
${lines.join('\n')}
"""

[[cell]]
kind = "study"
name = "trial"
data = "table"
outcome = "score"
groups = "dose"
levels = ["0 mg", "5 mg", "10 mg", "20 mg", "40 mg"]
scores = [0, 5, 10, 20, 40]
control = "0 mg"

[[cell]]
kind = "profile"
study = "trial"

[[cell]]
kind = "overall"
study = "trial"

[[cell]]
kind = "comparisons"
study = "trial"
family = "all pairs"

[[cell]]
kind = "trend"
study = "trial"
`;
}

/** @param {number[]} values */
function median(values) {
  const sorted = [...values].sort((a, b) => a - b);
  const middle = Math.floor(sorted.length / 2);
  return sorted.length % 2 ? (sorted[middle] ?? NaN) : ((sorted[middle - 1] ?? NaN) + (sorted[middle] ?? NaN)) / 2;
}

/** @param {string} what @param {number[]} times */
function note(what, times) {
  const ms = (/** @type {number} */ value) => value.toFixed(1).padStart(9);
  console.log(`${what.padEnd(64)}${ms(median(times))}${ms(Math.min(...times))}${ms(Math.max(...times))}`);
}

/** The time on the page's clock at which what is settled now has been drawn. @param {import('../web/harness.mjs').Opened['page']} page */
const drawn = (page) => page.evaluate(() => new Promise((done) => requestAnimationFrame(() => setTimeout(() => done(performance.now())))));

async function opening() {
  const first = [];
  const all = [];
  for (let repeat = 0; repeat < REPEATS; repeat += 1) {
    const opened = await openPage({ hash: 'example' });
    try {
      const entries = await settled(opened.page, 0);
      const computed = (/** @type {import('../web/engine-log.mjs').Entry} */ entry) =>
        entry.cells?.some((cell) => !['note', 'data', 'study'].includes(cell.kind) && cell.condition === 'settled' && cell.answered);
      const start = entries.find(computed);
      if (!start) throw new Error('the example has no computed answer');
      first.push(start.at);
      all.push(entries.findLast((entry) => entry.settled)?.at ?? NaN);
    } finally {
      await opened.close();
    }
  }
  note('open the file to the first computed answer', first);
  note('open the file to every answer of the example', all);
}

/**
 * From the last press of a key to the screen that shows its consequences.
 * @param {import('../web/harness.mjs').Opened['page']} page
 * @param {() => Promise<void>} act
 */
async function timed(page, act) {
  const since = await position(page);
  await act();
  await settled(page, since, 120_000);
  const end = /** @type {number} */ (await drawn(page));
  const start = await page.evaluate(() => /** @type {any} */ (window).pressedAt);
  return end - start;
}

/** @param {number} rows */
async function editing(rows) {
  const opened = await openPage({});
  const { page } = opened;
  try {
    await page.evaluate(() => addEventListener('keydown', (event) => Object.assign(window, { pressedAt: event.timeStamp }), { capture: true }));
    const file = join(folder, `rows-${rows}.levelwise.toml`);
    writeFileSync(file, notebook(rows));
    const since = await position(page);
    const started = await page.evaluate(() => performance.now());
    const input = await page.$('#file-input');
    if (!input) throw new Error('the page has no place to choose a file');
    await /** @type {any} */ (input).uploadFile(file);
    await settled(page, since, 300_000);
    note(`${rows} rows: choose the notebook's file to every answer`, [/** @type {number} */ (await drawn(page)) - started]);

    const values = [];
    await page.waitForSelector('.grid .active');
    for (let repeat = 0; repeat < REPEATS; repeat += 1) {
      await page.focus('.grid');
      await page.keyboard.press('Home');
      await page.keyboard.press('ArrowRight');
      await page.keyboard.type(`${40 + repeat}.5`);
      values.push(await timed(page, () => page.keyboard.press('Enter')));
    }
    note(`${rows} rows: a changed value to settled (all answers)`, values);

    const choices = [];
    const select = 'section[data-kind="comparisons"] select[data-field="adjust"]';
    await page.waitForSelector(select);
    for (let repeat = 0; repeat < REPEATS; repeat += 1) {
      await page.focus(select);
      choices.push(await timed(page, () => page.keyboard.press('ArrowDown')));
    }
    note(`${rows} rows: another adjustment to settled (comparisons)`, choices);
  } finally {
    await opened.close();
  }
}

console.log(`${`milliseconds, of ${REPEATS}`.padEnd(64)}${'median'.padStart(9)}${'least'.padStart(9)}${'most'.padStart(9)}`);
try {
  await opening();
  for (const rows of ROWS) await editing(rows);
} finally {
  rmSync(folder, { recursive: true, force: true });
}
