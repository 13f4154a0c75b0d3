/**
 * Working on a notebook by hand: both faces of a cell, the notebook's structure by keyboard, and what happens when the
 * engine fails.
 */

import assert from 'node:assert/strict';
import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { test } from 'node:test';
import { settled } from './engine-log.mjs';
import { withPage } from './harness.mjs';
import { settling } from './person.mjs';

/** @typedef {import('puppeteer-core').Page} Page */

const PLAN = `# Kept as it is.
levelwise = 1

[[cell]]
kind = "note"
text = """
# A plan
"""

[[cell]]
kind = "study"
name = "training"
outcome = "words"
groups = "practice"
levels = ["none", "15 min", "30 min"] # in minutes
`;

/**
 * Opens a notebook as a person would, by dropping its file on the page.
 * @param {Page} page
 * @param {string} text
 */
async function drop(page, text, name = 'plan.levelwise.toml') {
  await page.evaluate(
    (content, title) => {
      const files = new DataTransfer();
      files.items.add(new File([content], title));
      document.body.dispatchEvent(new DragEvent('drop', { dataTransfer: files, bubbles: true, cancelable: true }));
    },
    text,
    name,
  );
  await page.waitForSelector('.cell');
}

/**
 * @param {Page} page
 * @param {string} condition JavaScript that becomes true
 */
const comes = (page, condition) => page.waitForFunction(condition, { timeout: 10_000 });

/** @param {Page} page */
const headings = (page) => page.$$eval('.cell h2', (titles) => titles.map((title) => title.textContent));

/** @param {Page} page */
const editorText = (page) =>
  page.$eval('.text-face', (face) => [...(face.shadowRoot?.querySelectorAll('.cm-line') ?? [])].map((line) => line.textContent).join('\n'));

/**
 * @param {Page} page
 * @param {string} keys such as "Alt+ArrowUp"
 */
async function press(page, keys) {
  const names = /** @type {import('puppeteer-core').KeyInput[]} */ (keys.split('+'));
  const last = names.pop();
  for (const name of names) await page.keyboard.down(name);
  if (last) await page.keyboard.press(last);
  for (const name of names.reverse()) await page.keyboard.up(name);
}

test('what is typed into a blank stands in the text, what is typed into the text stands in the blank', async () => {
  await withPage({}, async ({ page }) => {
    await drop(page, PLAN);
    await page.click('[aria-label^="Text of Study"]');
    await comes(page, `document.querySelector('.text-face')?.shadowRoot.activeElement !== null`);
    await page.focus('[data-field="scores"]');
    await page.keyboard.type('0, 15, 30');
    await comes(page, `document.querySelector('.text-face').shadowRoot.querySelector('.cm-content').textContent.includes('scores = [0, 15, 30]')`);
    assert.equal(await page.evaluate(() => document.activeElement?.getAttribute('data-field')), 'scores', 'the keyboard stays in the blank');
    await page.select('[data-field="control"]', 'none');
    await comes(page, `document.querySelector('.text-face').shadowRoot.querySelector('.cm-content').textContent.includes('control = "none"')`);
    assert.match(await editorText(page), /levels = \["none", "15 min", "30 min"\] # in minutes/, 'comments are kept');

    await page.evaluate(() => /** @type {HTMLElement} */ (document.querySelector('.text-face')?.shadowRoot?.querySelector('.cm-content')).focus());
    await press(page, 'Control+End');
    await page.keyboard.type('unit = "words"');
    await comes(page, `document.querySelector('[data-field="unit"]').value === 'words'`);

    await press(page, 'Control+z');
    await comes(page, `document.querySelector('[data-field="unit"]').value === ''`);
  });
});

test('an unknown field is marked in the text and explained below the sentence, and nothing typed is lost', async () => {
  await withPage({}, async ({ page }) => {
    await drop(page, PLAN.replace('outcome =', 'outcom ='));
    await comes(page, `document.querySelector('.problems li')?.textContent.includes('Did you mean "outcome"?')`);
    await page.click('.problems li button');
    await comes(page, `document.querySelector('.text-face')?.shadowRoot.querySelector('.cm-lintRange-error') !== null`);
    assert.match(await editorText(page), /outcom = "words"/);
  });
});

test('the help line no longer says what is missing once it is filled in', async () => {
  await withPage({}, async ({ page }) => {
    await drop(page, PLAN.replace(/outcome = .*\n/, ''));
    await comes(page, `document.querySelector('[data-kind="study"] .problems li')?.textContent.includes('"outcome" is missing')`);
    await page.focus('[data-kind="study"] [data-field="outcome"]');
    await comes(page, `document.querySelector('[data-kind="study"] .help')?.textContent.includes('is missing')`);
    await page.keyboard.type('words');
    await comes(page, `document.querySelector('[data-kind="study"] .problems li') === null`);
    const help = await page.$eval('[data-kind="study"] .help', (line) => line.textContent ?? '');
    assert.match(help, /measured outcome/);
    assert.doesNotMatch(help, /missing/);
  });
});

test('cells are moved, doubled, deleted, named and brought back without a mouse', async () => {
  await withPage({}, async ({ page }) => {
    await drop(page, PLAN);
    await page.focus('[data-field="scores"]');
    await press(page, 'Alt+ArrowUp');
    await comes(page, `document.querySelector('.cell h2').textContent === 'Study'`);
    assert.equal(await page.evaluate(() => document.activeElement?.getAttribute('data-field')), 'scores', 'the keyboard moves with the cell');

    await page.focus('[aria-label^="Duplicate: Study"]');
    await page.keyboard.press('Enter');
    await comes(page, `document.querySelectorAll('.cell').length === 3`);
    await page.focus('[aria-label^="Delete: Note"]');
    await page.keyboard.press('Enter');
    await comes(page, `document.querySelectorAll('.cell').length === 2`);
    assert.deepEqual(await headings(page), ['Study', 'Study']);
    assert.equal(await page.evaluate(() => document.activeElement?.tagName), 'H2', 'the keyboard goes to a neighbour');
    await press(page, 'Control+z');
    await comes(page, `document.querySelectorAll('.cell').length === 3`);

    await page.$$eval('.gap .add', (buttons) => /** @type {HTMLElement|undefined} */ (buttons.at(-1))?.focus());
    await page.keyboard.press('Enter');
    await page.waitForSelector('.kinds:not([hidden]) button');
    await page.$$eval('.kinds:not([hidden]) button', (buttons) => buttons.find((button) => button.textContent?.startsWith('Comparisons'))?.focus());
    await page.keyboard.press('Enter');
    await comes(page, `[...document.querySelectorAll('.cell h2')].at(-1).textContent === 'Comparisons'`);
    await comes(page, `document.activeElement.closest('.cell')?.dataset.kind === 'comparisons'`);

    await page.focus('.cell[data-kind="study"] textarea.name');
    await page.keyboard.down('Control');
    await page.keyboard.press('a');
    await page.keyboard.up('Control');
    await page.keyboard.type('recall');
    await page.keyboard.press('Enter');
    await comes(page, `[...document.querySelectorAll('.rail-title')].some((title) => title.textContent === 'recall')`);
  });
});

test('a notebook that is saved and opened again is the same', async () => {
  await withPage({}, async ({ page, downloaded }) => {
    await drop(page, PLAN);
    await press(page, 'Control+s');
    assert.equal(await downloaded(/^plan\.levelwise\.toml$/), PLAN);
  });
});

test('when the engine fails, a fresh one takes over with everything that was typed', async () => {
  await withPage({}, async ({ page, downloaded }) => {
    await drop(page, PLAN);
    await page.focus('[data-field="scores"]');
    await page.keyboard.type('0, 15, 30');
    await page.keyboard.press('Tab');
    await comes(page, `document.querySelector('.unsaved').textContent.includes('not saved')`);
    // Typed and not yet sent when the engine fails.
    await page.$eval('.cell[data-kind="study"] [data-field="outcome"]', (blank) => {
      /** @type {HTMLTextAreaElement} */ (blank).value = 'words recalled';
      blank.dispatchEvent(new Event('input'));
    });
    // What a failing engine makes the worker do.
    await page.workers()[0]?.evaluate(() => {
      self.postMessage({ type: 'failed', message: 'a test stopped it' });
    });
    await comes(page, `document.querySelector('.notice').textContent.includes('Nothing you typed is lost')`);
    await comes(page, `document.querySelectorAll('.cell').length === 2 && document.querySelector('[data-field="scores"]').value === '0, 15, 30'`);
    await page.focus('[data-field="unit"]');
    await page.keyboard.type('words');
    await press(page, 'Control+s');
    const saved = await downloaded(/^plan\.levelwise\.toml$/);
    assert.match(saved, /^# Kept as it is\.\nlevelwise = 1\n/);
    assert.match(saved, /scores = \[0, 15, 30\]/);
    assert.match(saved, /unit = "words"/);
    assert.match(saved, /outcome = "words recalled"/);
  });
});

test('nothing is wider than a telephone, and the page has no fault that a checker finds', async () => {
  const axe = readFileSync(createRequire(new URL('../../www/package.json', import.meta.url)).resolve('axe-core/axe.min.js'), 'utf8');
  await withPage({}, async ({ page }) => {
    await drop(page, PLAN.replace('outcome =', 'outcom ='));
    await comes(page, `document.querySelector('.problems li')`);
    await page.click('[aria-label^="Text of Study"]');
    await page.$$eval('.gap .add', (buttons) => /** @type {HTMLElement|undefined} */ (buttons[0])?.click());
    await page.waitForSelector('.kinds:not([hidden]) button');
    for (const [width, scheme] of /** @type {const} */ ([[360, 'dark'], [360, 'light'], [1200, 'dark'], [1200, 'light']])) {
      await page.setViewport({ width, height: 800 });
      await page.emulateMediaFeatures([{ name: 'prefers-color-scheme', value: scheme }]);
      assert.ok((await page.evaluate(() => document.documentElement.scrollWidth)) <= width, `${width} px`);
      const faults = await page.evaluate(`(async () => { ${axe}; return (await axe.run()).violations.map((fault) => fault.id + ': ' + fault.nodes.map((node) => node.html).join(' ')); })()`);
      assert.deepEqual(faults, [], `${width} px, ${scheme}`);
    }
  });
});

test('a list is filled in by ticking, with the keyboard alone, and the licences can be read', async () => {
  await withPage({ hash: 'example=teaching-trial' }, async ({ page }) => {
    await settled(page, 0);
    const button = await page.waitForSelector('section[data-kind="comparisons"] [data-field="also"]');
    assert(button);
    await button.focus();
    await page.keyboard.press('Enter');
    await page.keyboard.press('Tab');
    await settling(page, () => page.keyboard.press('Space'));
    assert.equal(await page.evaluate(() => document.activeElement?.getAttribute('type')), 'checkbox', 'the keyboard stays in the list');
    await page.keyboard.press('Escape');
    assert.equal(await button.evaluate((element) => document.activeElement === element), true);
    assert.equal(await button.evaluate((element) => element.textContent), 'Tukey');
    assert.equal(await page.$eval('.ticks', (list) => /** @type {HTMLElement} */ (list).hidden), true);

    await page.locator('.privacy button ::-p-text(Licences)').click();
    const words = await page.$eval('dialog[open] pre', (block) => block.textContent ?? '');
    assert.match(words, /Permission is hereby granted/);
    assert.match(words, /Apache License/);
  });
});
