/**
 * The numerics compiled to WebAssembly, in Chromium, beside SciPy, natively, on the same machine in one run: times and digits.
 *
 * The two sides take turns, one round after the other. A job is the whole way from measurements to p-values and simultaneous
 * intervals, or one call of a function. Digits are those in which an answer agrees with 20 digits or more from elsewhere:
 * `data/comparisons.json` here, and the files of `tests/reference/data/values`; the least and the median over all numbers of
 * the job or all cases of the file. Without SciPy (LEVELWISE_SCIPY names a Python that has it) ours is measured alone.
 */

import { spawn } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { createInterface } from 'node:readline';
import { fileURLToPath } from 'node:url';
import { withNumbers } from '../web/numbers.mjs';

const REPEATS = Number(process.env.REPEATS ?? 5);
/** Calls are repeated for at least this many milliseconds where the clock is coarse. */
const LONG_ENOUGH = 50;

/** @param {string} path */
const json = (path) => JSON.parse(readFileSync(fileURLToPath(new URL(path, import.meta.url)), 'utf8'));

/** @typedef {{ values: number[][], p: string[], lower: string[], upper: string[] }} Family */
/** @type {{ all_pairs: Family, against_first: Family }} */
const families = json('data/comparisons.json');

/**
 * A job, as each side is asked for it.
 * @typedef {object} Job
 * @property {string} name
 * @property {string} scipy the function of `scipy_side.py`
 * @property {unknown[]} asked its arguments
 * @property {string} ours the function of the module
 * @property {unknown[]} given its arguments
 */

/**
 * An answer and how long it took.
 * @typedef {{ seconds: number, answer: any }} Timed
 */

/** @returns {Promise<{ version: string, ask: (job: Job, calls: number) => Promise<Timed>, stop: () => void } | undefined>} */
async function startScipy() {
  const python = process.env.LEVELWISE_SCIPY;
  if (!python) return undefined;
  const script = fileURLToPath(new URL('scipy_side.py', import.meta.url));
  // Warnings about integrals that did not converge are SciPy's own affair; the digits show what came of it.
  const child = spawn(python, ['-W', 'ignore', script], { stdio: ['pipe', 'pipe', 'inherit'] });
  const lines = createInterface(child.stdout)[Symbol.asyncIterator]();
  const reply = async () => {
    const { value, done } = await lines.next();
    if (done) throw new Error('SciPy stopped without an answer');
    return JSON.parse(value);
  };
  return {
    version: (await reply()).version,
    ask(job, calls) {
      child.stdin.write(`${JSON.stringify({ job: job.scipy, arguments: job.asked, calls })}\n`);
      return reply();
    },
    stop: () => child.stdin.end(),
  };
}

/**
 * @param {import('puppeteer-core').Page} page
 * @param {Job} job
 * @param {number} least
 * @returns {Promise<Timed>}
 */
function inBrowser(page, job, least) {
  return page.evaluate(
    ({ ours, given, least }) => {
      const call = /** @type {any} */ (window).numbers[ours];
      const ready = given.map((it) => (Array.isArray(it) ? Float64Array.from(it) : Number(it === 'inf' ? Infinity : it)));
      let answer;
      let calls = 0;
      const start = performance.now();
      let now = start;
      do {
        answer = call(...ready);
        calls += 1;
        now = performance.now();
      } while (now - start < least);
      return { seconds: (now - start) / 1000 / calls, answer: typeof answer === 'number' ? answer : Array.from(answer) };
    },
    { ours: job.ours, given: job.given, least },
  );
}

/** @param {number[]} values */
function median(values) {
  const sorted = [...values].sort((a, b) => a - b);
  const middle = sorted.length >> 1;
  return sorted.length % 2 ? (sorted[middle] ?? NaN) : ((sorted[middle - 1] ?? NaN) + (sorted[middle] ?? NaN)) / 2;
}

/**
 * How many digits two numbers have in common, on the scale given: 0 to 16.
 * @param {number} found @param {number} exact @param {number} [scale]
 */
const digits = (found, exact, scale = Math.abs(exact)) => Math.min(16, Math.max(0, -Math.log10(Math.abs(found - exact) / scale))) || 0;

/** @param {number[]} all */
const inShort = (all) => `${Math.min(...all).toFixed(1)} / ${median(all).toFixed(1)}`;

/** @param {number} seconds */
function time(seconds) {
  if (seconds >= 0.1) return `${seconds.toFixed(2)} s`;
  return seconds >= 1e-3 ? `${(seconds * 1e3).toFixed(1)} ms` : `${(seconds * 1e6).toFixed(1)} us`;
}

/** @param {string[]} cells */
const row = (cells) => console.log(cells.map((cell, index) => (index ? cell.padStart(14) : cell.padEnd(58))).join(''));

/**
 * The digits of p-values (relative) and of the intervals' bounds (relative to half the interval's length).
 * @param {number[][]} rows @param {Family} family
 */
function familyDigits(rows, family) {
  const p = rows.map(([found = NaN], index) => digits(found, Number(family.p[index])));
  const bounds = rows.flatMap(([, low = NaN, high = NaN], index) => {
    const [lower, upper] = [Number(family.lower[index]), Number(family.upper[index])];
    return [digits(low, lower, (upper - lower) / 2), digits(high, upper, (upper - lower) / 2)];
  });
  return { p, bounds };
}

/** @param {number[]} flat */
const inRows = (flat) => Array.from({ length: flat.length / 3 }, (_, index) => flat.slice(3 * index, 3 * index + 3));

/** @param {'all_pairs'|'against_first'} which @param {string} name @returns {Job} */
function familyJob(which, name) {
  const { values } = families[which];
  return { name, scipy: which, asked: [values], ours: which, given: [values.flat(), values[0]?.length] };
}

/** @param {number} q @param {number} groups @param {number|'inf'} df @returns {Job} */
const tailJob = (q, groups, df) => ({
  name: `studentized range, tail: ${groups} groups, ${df} df, q ${q}`,
  scipy: 'tail',
  asked: [q, groups, df],
  ours: 'studentized_range_sf',
  given: [q, groups, df],
});

/** @param {number} upperP @param {number} groups @param {number|'inf'} df @returns {Job} */
const quantileJob = (upperP, groups, df) => ({
  name: `studentized range, quantile: ${groups} groups, ${df} df, p ${upperP}`,
  scipy: 'quantile',
  asked: [upperP, groups, df],
  ours: 'studentized_range_upper_quantile',
  given: [upperP, groups, df],
});

const scipy = await startScipy();
try {
  await withNumbers(async (page) => {
    const theirs = scipy ? `SciPy ${scipy.version}` : '';
    row([`median of ${REPEATS}`, theirs, 'in Chromium', scipy ? 'times faster' : '']);
    /** @param {Job} job */
    const compare = async (job) => {
      // Once for warming up; the answers are looked at, too.
      const last = { scipy: await scipy?.ask(job, 1), ours: await inBrowser(page, job, LONG_ENOUGH) };
      const times = { scipy: /** @type {number[]} */ ([]), ours: /** @type {number[]} */ ([]) };
      for (let repeat = 0; repeat < REPEATS; repeat += 1) {
        if (scipy) times.scipy.push((await scipy.ask(job, 1)).seconds);
        times.ours.push((await inBrowser(page, job, LONG_ENOUGH)).seconds);
      }
      const [slow, fast] = [median(times.scipy), median(times.ours)];
      row([job.name, scipy ? time(slow) : '', time(fast), scipy ? (slow / fast).toFixed(0) : '']);
      return { scipy: last.scipy?.answer, ours: last.ours.answer };
    };
    const tukey = await compare(familyJob('all_pairs', 'Tukey: 20 groups x 50, 190 p-values and intervals'));
    const dunnett = await compare(familyJob('against_first', 'Dunnett: 5 comparisons x 20, p-values and intervals'));
    for (const [q, groups, df] of /** @type {const} */ ([[5.3, 3, 10], [5.9, 20, 980], [10.5, 200, 10], [7, 200, 'inf']])) {
      await compare(tailJob(q, groups, df));
    }
    for (const [p, groups, df] of /** @type {const} */ ([[0.05, 3, 10], [0.05, 20, 980], [0.05, 200, 10]])) {
      await compare(quantileJob(p, groups, df));
    }

    console.log();
    row(['correct digits, least / median', theirs, 'in Chromium']);
    /** @param {string} name @param {number[] | undefined} theirs @param {number[]} ours */
    const digitsRow = (name, theirs, ours) => row([name, theirs ? inShort(theirs) : '', inShort(ours)]);
    for (const [name, which, found] of /** @type {const} */ ([['Tukey', 'all_pairs', tukey], ['Dunnett', 'against_first', dunnett]])) {
      const there = found.scipy && familyDigits(found.scipy, families[which]);
      const here = familyDigits(inRows(found.ours), families[which]);
      digitsRow(`${name}: p-values of the job above`, there?.p, here.p);
      digitsRow(`${name}: bounds of the intervals above`, there?.bounds, here.bounds);
    }
    /** @param {string} name @param {string} file @param {(it: any) => Job} job */
    const overFile = async (name, file, job) => {
      /** @type {{ cases: { k: number, df: number|'inf', value: string }[] }} */
      const { cases } = json(`../reference/data/values/${file}.json`);
      const [there, here] = [/** @type {number[]} */ ([]), /** @type {number[]} */ ([])];
      for (const it of cases) {
        if (scipy) there.push(digits((await scipy.ask(job(it), 1)).answer, Number(it.value)));
        here.push(digits((await inBrowser(page, job(it), 0)).answer, Number(it.value)));
      }
      digitsRow(`${name}, ${cases.length} cases`, scipy && there, here);
    };
    await overFile('studentized range, tail', 'studentized_range_sf', (it) => tailJob(it.q, it.k, it.df));
    await overFile('studentized range, quantile', 'studentized_range_quantile', (it) => quantileJob(it.upper_p, it.k, it.df));
  });
} finally {
  scipy?.stop();
}
