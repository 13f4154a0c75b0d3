/**
 * Comparisons as a person asks for them, through the sentence: by means, ranks and rearrangements, and a graph of
 * hypotheses with its weights and transitions typed in. What the page shows is held against the headless program's
 * full-precision numbers for the notebook that the page saved.
 */

import assert from 'node:assert/strict';
import { spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { after, test } from 'node:test';
import { position, recomputed, settled } from './engine-log.mjs';
import { PROGRAM, withPage } from './harness.mjs';
import { addCell, assertShows, fill, fillIn, paste, plain, settling, tablesOf } from './person.mjs';

/** @typedef {import('puppeteer-core').Page} Page */

/** Invented for this test: hours of sleep, groups of unequal size, with ties. */
const GROUPS = {
  placebo: [5.1, 6.2, 5.8, 4.9, 6.6, 5.5, 6.0, 5.3, 5.9],
  '5 mg': [5.6, 6.4, 6.9, 5.2, 6.1, 7.0, 5.8],
  '10 mg': [6.8, 7.4, 6.3, 7.9, 6.6, 7.1, 8.2, 6.9],
  '20 mg': [7.2, 8.4, 7.7, 6.5, 8.8, 7.9, 7.3],
  '40 mg': [7.0, 8.1, 9.2, 7.6, 8.5, 6.7, 7.8, 8.9],
};
const TABLE = ['dose\tsleep', ...Object.entries(GROUPS).flatMap(([level, hours]) => hours.map((x) => `${level}\t${x}`))].join('\n');
const LEVELS = Object.keys(GROUPS);

/** Rearrangements that keep any machine busy for minutes; what is stopped need not be finished. */
const NEVER_DONE = '1000000';
/** Rearrangements that take many slices, and a few seconds. */
const SOME = '100000';

const folder = mkdtempSync(join(tmpdir(), 'levelwise-comparisons-'));
after(() => rmSync(folder, { recursive: true, force: true }));

/**
 * The page's comparisons cells, each as a selector.
 * @param {Page} page
 */
const comparisons = (page) => page.$$eval('section[data-kind="comparisons"]', (sections) => sections.map((section) => `#${section.id}`));

/**
 * Adds a comparisons cell and gives its selector.
 * @param {Page} page
 */
async function added(page) {
  await addCell(page, 'Comparisons');
  const cell = (await comparisons(page)).at(-1);
  assert(cell);
  return cell;
}

/** @param {Page} page */
async function studyOfDoses(page) {
  await page.click('.start textarea');
  await settling(page, () => paste(page, TABLE));
  await fill(page, 'study', 'outcome', 'sleep');
  await fill(page, 'study', 'groups', 'dose');
  await fill(page, 'study', 'levels', LEVELS.join(', '));
  await fill(page, 'study', 'control', 'placebo');
  await fill(page, 'study', 'variances', 'equal');
}

/**
 * Saves, and gives the headless program's results of the comparisons cells in the file, in order.
 * @param {import('./harness.mjs').Opened} opened
 * @returns {Promise<any[]>}
 */
async function savedResults({ page, downloaded }) {
  const button = await page.waitForSelector('#tools button ::-p-text(Save)');
  await button?.click();
  const file = join(folder, 'saved.levelwise.toml');
  writeFileSync(file, await downloaded(/\.levelwise\.toml$/));
  /** @type {any[]} */
  const cells = JSON.parse(spawnSync(PROGRAM, ['answer', file, '--json'], { encoding: 'utf8' }).stdout).cells;
  const found = cells.filter((cell) => cell.kind === 'comparisons');
  for (const cell of found) assert.equal(cell.condition, 'settled', JSON.stringify(cell.diagnostics));
  return found;
}

/**
 * Every row of the cell's table has the numbers of the headless program, and the headline is its headline.
 * @param {Page} page
 * @param {string} cell
 * @param {any} expected the headless program's cell
 * @param {Record<string, string>} columns key in the JSON by column heading; "1" is the second column
 */
async function assertSame(page, cell, expected, columns) {
  const { rows } = expected.results;
  const table = (await tablesOf(page, cell))[0] ?? [];
  assert.equal(table.length, rows.length);
  for (const row of rows) {
    const shown = table.find((line) => plain(Object.values(line)[0]) === plain(row.name));
    assert(shown, `no row "${row.name}" among ${table.map((line) => Object.values(line)[0]).join('; ')}`);
    for (const [column, key] of Object.entries(columns)) {
      const text = column === '1' ? Object.values(shown)[1] : shown[column];
      assertShows(text, row[key], `${row.name}, ${key}`);
    }
  }
  assert.equal(plain(await page.$eval(`${cell} .a-headline`, (words) => words.textContent ?? '')), plain(expected.headline));
}

/**
 * The text alternatives of the drawings in a cell's answer.
 * @param {Page} page
 * @param {string} cell
 */
const drawings = (page, cell) => page.$$eval(`${cell} .answer svg[role="img"]`, (all) => all.map((one) => one.getAttribute('aria-label') ?? ''));

test('means, ranks and a graph of hypotheses are asked for in the sentence and answered as without a page', async () => {
  await withPage({}, async (opened) => {
    const { page } = opened;
    await studyOfDoses(page);

    const means = await added(page);
    await fill(page, means, 'family', 'each against control');
    await fill(page, means, 'claim', 'non-inferiority');
    await fill(page, means, 'margin', '0.4');
    await fill(page, means, 'sides', 'greater');

    const ranks = await added(page);
    await fill(page, ranks, 'basis', 'ranks');
    await fill(page, ranks, 'ranking', 'joint');
    await fill(page, ranks, 'adjust', 'Hommel');

    const graph = await added(page);
    await fill(page, graph, 'family', 'each against control');
    await fill(page, graph, 'adjust', 'graph');
    await fill(page, graph, 'order', '40 mg - placebo, 20 mg - placebo, 10 mg - placebo, 5 mg - placebo');
    await fill(page, graph, 'weights', '40 mg - placebo: 0.5\n20 mg - placebo: 0.5');
    // The minus sign as the page writes it, as someone would copy it from the table.
    const passed = [
      '40 mg \u2212 placebo; 10 mg \u2212 placebo; 1',
      '20 mg \u2212 placebo; 40 mg \u2212 placebo; 0.5',
      '20 mg \u2212 placebo; 5 mg \u2212 placebo; 0.5',
      '10 mg \u2212 placebo; 5 mg \u2212 placebo; 1',
    ];
    await fill(page, graph, 'transitions', passed.join('\n'));

    const [byMeans, byRanks, byGraph] = await savedResults(opened);
    assert.equal(byMeans.results.adjust, 'Dunnett');
    assert.deepEqual([byMeans.results.claim, byMeans.results.margin], ['non-inferiority', [0.4]]);
    await assertSame(page, means, byMeans, { 1: 'estimate', df: 'df', 'p, raw': 'p', 'p, adjusted': 'p_adjusted' });

    assert.deepEqual([byRanks.results.basis, byRanks.results.ranking, byRanks.results.adjust], ['ranks', 'joint', 'Hommel']);
    await assertSame(page, ranks, byRanks, { 1: 'estimate', z: 'statistic', 'p, raw': 'p', 'p, adjusted': 'p_adjusted' });

    assert.deepEqual(byGraph.results.path.weights, [0.5, 0.5, 0, 0]);
    await assertSame(page, graph, byGraph, { 1: 'estimate', 'p, raw': 'p', 'p, adjusted': 'p_adjusted' });
    const declared = (await drawings(page, graph)).find((words) => words.startsWith('The graph as declared'));
    assert(declared, 'the graph is drawn');
    for (const level of LEVELS.slice(1)) assert.ok(plain(declared).includes(`${level} - placebo`), `${level} in: ${declared}`);
    assert.doesNotMatch((await drawings(page, means)).join(), /graph as declared/);
  });
});

test('rearrangements are worked on in the open: other cells are answered meanwhile, and work that is not wanted ends', async () => {
  await withPage({}, async (opened) => {
    const { page } = opened;
    await studyOfDoses(page);
    const cell = await added(page);
    const id = Number(cell.replace('#cell-', ''));
    await addCell(page, 'Power');
    const power = await page.$eval('section[data-kind="power"]', (section) => Number(section.id.replace('cell-', '')));
    await fill(page, cell, 'basis', 'permutation');

    // Far more repeats than anyone would wait for: the cell says how far it is.
    const start = await position(page);
    await fillIn(page, cell, 'repeats', NEVER_DONE);
    await page.waitForFunction((selector) => document.querySelector(selector)?.textContent?.includes('Working: '), { timeout: 20_000 }, `${cell} .headline`);
    const line = await page.$eval(`${cell} .headline`, (words) => words.textContent ?? '');
    assert.match(plain(line), /^Working: \d+ % done(; the smallest adjusted p so far is \S+ ± \S+)?$/);
    assert.equal(await page.$eval(`${cell} .answer`, (answer) => answer.getAttribute('aria-busy')), 'true');

    // Another cell's edit is answered while that goes on.
    const before = await position(page);
    await fillIn(page, 'power', 'groups', '3');
    await page.waitForFunction(
      (from, other) => /** @type {any} */ (window).engineLog.slice(from).some((/** @type {any} */ { recomputed: ids }) => ids?.includes(other)),
      { timeout: 20_000 },
      before,
      power,
    );
    const meanwhile = await page.evaluate((from) => /** @type {any} */ (window).engineLog.slice(from), start);
    assert.ok(!recomputed(meanwhile).includes(id), 'the long work has not ended');
    assert.equal(await page.$eval(`${cell} .condition`, (mark) => mark.textContent), 'working');

    // With fewer repeats the work so far is of no use: it is dropped, and the new question is answered.
    const log = await settling(page, () => fillIn(page, cell, 'repeats', SOME));
    assert.ok(recomputed(log).includes(id));
    const lines = log.flatMap(({ cells = [] }) => cells.filter((one) => one.id === id && one.condition === 'working').map(({ headline }) => headline));
    assert.ok(new Set(lines.filter((words) => words.startsWith('Working: '))).size > 2, `many slices: ${lines.join(' | ')}`);
    const [found] = await savedResults(opened);
    assert.equal(found.results.basis, 'permutation');
    await assertSame(page, cell, found, { 1: 'estimate', 'p, raw': 'p', 'p, adjusted': 'p_adjusted' });

    // The cell is silent about what was dropped.
    const since = await position(page);
    await settling(page, () => fillIn(page, 'power', 'groups', '4'));
    assert.deepEqual(recomputed(await settled(page, since)), [power]);
  });
});
