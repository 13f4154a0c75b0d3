/**
 * What the page looks like, for the README: taken from the first example by the browser that tests the page. The picture
 * in the repository is replaced when UPDATE_SCREENSHOT is set, or when there is none.
 */

import assert from 'node:assert/strict';
import { existsSync, writeFileSync } from 'node:fs';
import { test } from 'node:test';
import { fileURLToPath } from 'node:url';
import { settled } from './engine-log.mjs';
import { withPage } from './harness.mjs';

const PICTURE = fileURLToPath(new URL('../../www/screenshot.png', import.meta.url));
/** Pictures stay in the history for good: a larger one is not worth it. */
const LARGEST = 150_000;

test('the picture of the README can be taken and is small', async () => {
  await withPage({ hash: 'example' }, async ({ page }) => {
    await settled(page, 0);
    await page.setViewport({ width: 1100, height: 620 });
    await page.evaluate(() => {
      document.querySelectorAll('section[data-kind="comparisons"]')[1]?.scrollIntoView();
      scrollBy(0, -60);
    });
    await new Promise((done) => setTimeout(done, 500));
    const picture = await page.screenshot({ type: 'png' });
    assert.deepEqual([...picture.slice(0, 4)], [0x89, 0x50, 0x4e, 0x47]);
    assert(picture.length > 20_000 && picture.length < LARGEST, `${picture.length} bytes`);
    if (process.env['UPDATE_SCREENSHOT'] || !existsSync(PICTURE)) writeFileSync(PICTURE, picture);
  });
});
