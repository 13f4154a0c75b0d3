/** What a person does with the page, and what a person reads on it. */

import assert from 'node:assert/strict';
import { position, settled } from './engine-log.mjs';

/** @typedef {import('puppeteer-core').Page} Page */

/**
 * Does something and waits until it has settled.
 * @param {Page} page
 * @param {() => Promise<unknown>} act
 */
export async function settling(page, act) {
  const since = await position(page);
  await act();
  return settled(page, since);
}

/**
 * Pastes text where the keyboard is, by way of the clipboard.
 * @param {Page} page
 * @param {string} text
 */
export async function paste(page, text) {
  const session = await page.createCDPSession();
  await session.send('Browser.grantPermissions', { permissions: ['clipboardReadWrite', 'clipboardSanitizedWrite'] });
  await page.evaluate((words) => navigator.clipboard.writeText(words), text);
  await page.keyboard.down('Control');
  await page.keyboard.press('KeyV', { commands: ['Paste'] });
  await page.keyboard.up('Control');
  await session.detach();
}

/**
 * A cell is meant by its kind, or where there are several of it, by "#" and its identity in the page.
 * @param {string} which
 */
const cell = (which) => (which.startsWith('#') ? which : `section[data-kind="${which}"]`);

/**
 * Chooses in a blank of a cell's sentence, or types into it, and goes on without waiting for the answer.
 * @param {Page} page
 * @param {string} which
 * @param {string} field
 * @param {string} value
 */
export async function fillIn(page, which, field, value) {
  const selector = `${cell(which)} [data-field="${field}"]`;
  const control = await page.waitForSelector(selector);
  assert(control, selector);
  if ((await control.evaluate((element) => element.tagName)) === 'SELECT') {
    await control.select(value);
    return;
  }
  await control.click({ count: 3 });
  await control.type(value);
  await page.keyboard.press('Tab');
}

/**
 * Fills in a blank and waits until that has settled.
 * @param {Page} page
 * @param {string} which
 * @param {string} field
 * @param {string} value
 */
export function fill(page, which, field, value) {
  return settling(page, () => fillIn(page, which, field, value));
}

/**
 * Adds a cell at the end.
 * @param {Page} page
 * @param {string} title the kind as the list names it
 */
export function addCell(page, title) {
  return settling(page, async () => {
    const places = await page.$$('.gap button.add');
    await places.at(-1)?.click();
    const button = await page.waitForSelector(`.gap .kinds:not([hidden]) button ::-p-text(${title})`);
    await button?.click();
  });
}

/**
 * The tables of a cell's answer, each as its rows by column heading.
 * @param {Page} page
 * @param {string} which
 * @returns {Promise<Record<string, string>[][]>}
 */
export function tablesOf(page, which) {
  return page.$$eval(`${cell(which)} .answer table`, (tables) =>
    tables.map((table) => {
      const texts = (/** @type {Element} */ row) => [...row.querySelectorAll('th, td')].map((value) => value.textContent?.trim() ?? '');
      const [heading, ...rows] = [...table.querySelectorAll('tr')].map(texts);
      return rows.map((row) => Object.fromEntries(row.map((text, at) => [heading?.[at] ?? String(at), text])));
    }),
  );
}

/**
 * Text with the minus sign and the spaces of a keyboard.
 * @param {string|undefined} shown
 */
export const plain = (shown) => (shown ?? '').replaceAll('\u2212', '-').replaceAll(/[\s\u00a0\u202f\u2009]+/g, ' ');

/**
 * Whether a number on the page is `value`, rounded as it is shown.
 * @param {string|undefined} shown
 * @param {number} value
 */
export function assertShows(shown, value, what = '') {
  const text = plain(shown).replaceAll(/[ ,]/g, '');
  const message = `${what}: the page shows "${shown}", the headless program has ${value}`;
  if (text.startsWith('<')) {
    assert(value < Number(text.slice(1)), message);
    return;
  }
  assert.match(text, /^-?\d+(\.\d+)?$/, message);
  const decimals = text.split('.')[1]?.length ?? 0;
  assert(Math.abs(Number(text) - value) <= 0.5 * 10 ** -decimals * (1 + 1e-9), message);
}
