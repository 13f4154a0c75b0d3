/**
 * The main job as a person does it: paste a table, fill in the blanks, read the answers, change a value, save, reopen.
 * What the page shows is held against the headless program's full-precision numbers for the notebook that the page saved.
 */

import assert from 'node:assert/strict';
import { spawnSync } from 'node:child_process';
import { mkdtempSync, readFileSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { after, test } from 'node:test';
import { fileURLToPath } from 'node:url';
import { recomputed, settled } from './engine-log.mjs';
import { PROGRAM, withPage } from './harness.mjs';
import { addCell, assertShows, fill, paste, plain, settling, tablesOf } from './person.mjs';

/** Invented for this test: words recalled after some minutes of practice, eight people a group. */
const GROUPS = {
  none: [8, 11, 9, 12, 7, 10, 13, 9],
  '5 min': [12, 10, 14, 11, 13, 15, 9, 12],
  '15 min': [15, 17, 13, 16, 14, 18, 12, 16],
  '40 min': [16, 18, 15, 19, 17, 14, 20, 17],
};
const TABLE = ['practice\twords', ...Object.entries(GROUPS).flatMap(([level, words]) => words.map((n) => `${level}\t${n}`))].join('\n');

const folder = mkdtempSync(join(tmpdir(), 'levelwise-job-'));
after(() => rmSync(folder, { recursive: true, force: true }));

/** @typedef {{ kind: string, condition: string, diagnostics: unknown[], headline: string, results: any }} HeadlessCell */

/**
 * The headless program's answers to a notebook.
 * @param {string} text
 * @returns {HeadlessCell[]}
 */
function headless(text) {
  const file = join(folder, 'saved.levelwise.toml');
  writeFileSync(file, text);
  // The exit status 1 says that a cell needs mending; which one, the tests find in what is printed.
  return JSON.parse(spawnSync(PROGRAM, ['answer', file, '--json'], { encoding: 'utf8' }).stdout).cells;
}

/** @param {import('puppeteer-core').Page} page */
async function buildNotebook(page) {
  await page.click('.start textarea');
  await settling(page, () => paste(page, TABLE));
  await fill(page, 'study', 'outcome', 'words');
  await fill(page, 'study', 'groups', 'practice');
  await fill(page, 'study', 'levels', 'none, 5 min, 15 min, 40 min');
  await fill(page, 'study', 'scores', '0, 5, 15, 40');
  await fill(page, 'study', 'variances', 'equal');
  await addCell(page, 'Comparisons');
  await fill(page, 'comparisons', 'adjust', 'Tukey');
  await addCell(page, 'Trend');
  await addCell(page, 'Power');
  await fill(page, 'power', 'groups', '3');
  await fill(page, 'power', 'effect', '0.25');
}

/**
 * Saves and gives the text of the file.
 * @param {import('./harness.mjs').Opened} opened
 */
async function save({ page, downloaded }) {
  const button = await page.waitForSelector('#tools button ::-p-text(Save)');
  await button?.click();
  return downloaded(/\.levelwise\.toml$/);
}

/**
 * Every number of the comparisons' and the trend's rows on the page is the headless program's.
 * @param {import('puppeteer-core').Page} page
 * @param {HeadlessCell[]} cells
 */
async function assertSameNumbers(page, cells) {
  for (const cell of cells) assert.equal(cell.condition, 'settled', `${cell.kind}: ${JSON.stringify(cell.diagnostics)}`);
  for (const [kind, columns] of /** @type {const} */ ([
    ['comparisons', { 1: 'estimate', df: 'df', 'p, raw': 'p', 'p, adjusted': 'p_adjusted' }],
    ['trend', { Coefficient: 'slope', t: 'statistic', df: 'df', p: 'p', SS: 'ss' }],
  ])) {
    const rows = cells.find((cell) => cell.kind === kind)?.results.rows;
    const table = (await tablesOf(page, kind))[0] ?? [];
    assert.equal(rows.length, kind === 'comparisons' ? 6 : 3);
    for (const row of rows) {
      const shown = table.find((line) => plain(Object.values(line)[0]) === plain(row.name));
      assert(shown, `${kind}: no row "${row.name}" among ${table.map((line) => Object.values(line)[0]).join('; ')}`);
      for (const [column, key] of Object.entries(columns)) {
        const text = column === '1' ? Object.values(shown)[1] : shown[column];
        assertShows(text, row[key], `${kind}, ${row.name}, ${key}`);
      }
    }
  }
}

for (const from of /** @type {const} */ (['file', 'http'])) {
  test(`the main job, from ${from}`, async () => {
    /** @type {string} */
    let saved = '';
    await withPage({ from }, async (opened) => {
      const { page } = opened;
      await buildNotebook(page);
      saved = await save(opened);
      const cells = headless(saved);
      assert.deepEqual(cells.map((cell) => cell.kind), ['data', 'study', 'comparisons', 'trend', 'power']);
      assert.equal(cells[2]?.results.adjust, 'Tukey');
      await assertSameNumbers(page, cells);

      // One value changes: what depends on the table is computed anew, and the power cell, which does not, is not.
      await page.focus('.grid');
      await page.keyboard.press('Home');
      await page.keyboard.press('ArrowRight');
      await page.keyboard.type('10');
      const log = await settling(page, () => page.keyboard.press('Enter'));
      const kinds = await page.$$eval('section.cell', (sections) => sections.map((section) => /** @type {HTMLElement} */ (section).dataset['kind']));
      const ids = await page.$$eval('section.cell', (sections) => sections.map((section) => Number(section.id.replace('cell-', ''))));
      assert.deepEqual(recomputed(log).map((id) => kinds[ids.indexOf(id)]).sort(), ['comparisons', 'data', 'study', 'trend']);
      const changed = await save(opened);
      assert.notEqual(changed, saved);
      assert.match(changed, /none(\\t|\t)10\n/);
      await assertSameNumbers(page, headless(changed));
      saved = changed;
    });

    // Reopened in another browser, the notebook is the same and answers the same.
    await withPage({ from }, async (opened) => {
      const { page } = opened;
      const file = join(folder, `reopened-${from}.levelwise.toml`);
      writeFileSync(file, saved);
      await settling(page, async () => {
        const input = /** @type {import('puppeteer-core').ElementHandle<HTMLInputElement>|null} */ (await page.$('#file-input'));
        await input?.uploadFile(file);
      });
      await assertSameNumbers(page, headless(saved));
      assert.equal(await save(opened), saved);
    });
  });
}

const examples = fileURLToPath(new URL('../../www/examples/', import.meta.url));
for (const file of readdirSync(examples).sort()) {
  const name = file.replace('.levelwise.toml', '');
  test(`the example ${name} says on the page what it says in the headless program`, async () => {
    const expected = headless(readFileSync(examples + file, 'utf8'));
    assert.deepEqual(expected.flatMap((cell) => cell.diagnostics), []);
    await withPage({ hash: `example=${name}` }, async ({ page }) => {
      const log = await settled(page, 0);
      /** @type {Map<number, { kind: string, condition: string, headline: string }>} */
      const cells = new Map();
      for (const { id, kind, condition, headline } of log.flatMap((entry) => entry.cells ?? [])) cells.set(id, { kind, condition, headline });
      const shown = [...cells].sort(([a], [b]) => a - b).map(([, cell]) => cell);
      assert.deepEqual(shown, expected.map(({ kind, condition, headline }) => ({ kind, condition, headline })));
    });
  });
}
