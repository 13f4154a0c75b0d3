/**
 * The same numbers natively and in the browser. Every public function of the numerics over a grid of arguments, and the
 * answers of the example notebooks, are computed by the native program and by the WebAssembly module in Chromium. What is
 * promised is agreement to 1e-14, relative; what one libm gives is the same bits, and a difference there is a mistake too. The table is made in `tests/numbers`.
 */

import assert from 'node:assert/strict';
import { execFileSync } from 'node:child_process';
import { test } from 'node:test';
import { NATIVE, withNumbers } from './numbers.mjs';

/** Largest relative difference of two values that agree. */
const AGREEMENT = 1e-14;

/** @param {string} text */
const lines = (text) => text.split('\n').filter((line) => line !== '');

/**
 * A line's call and the number that came out.
 * @param {string} line
 * @returns {{ call: string, bits: string, value: number }}
 */
function point(line) {
  const found = /^(.*) ([0-9a-f]{16})$/.exec(line);
  assert(found, `a point without a value: ${line}`);
  const [, call = '', bits = ''] = found;
  return { call, bits, value: new Float64Array(new BigUint64Array([BigInt(`0x${bits}`)]).buffer)[0] ?? NaN };
}

/**
 * How far apart two values are, relative to the larger one; infinite when either is no number or only one is infinite.
 * @param {number} one
 * @param {number} other
 */
function distance(one, other) {
  if (one === other) return 0;
  const relative = Math.abs(one - other) / Math.max(Math.abs(one), Math.abs(other));
  return Number.isFinite(relative) ? relative : Infinity;
}

test('the comparison sees a difference of the last bits, and a value that is no number', () => {
  assert.equal(distance(0.1, 0.1), 0);
  assert.equal(distance(Infinity, Infinity), 0);
  assert(distance(1, 1 + 2e-14) > AGREEMENT);
  assert(distance(1e-300, 1.1e-300) > AGREEMENT);
  assert(distance(0, 1e-300) > AGREEMENT);
  assert.equal(distance(NaN, NaN), Infinity);
  assert.equal(distance(1, Infinity), Infinity);
  assert.deepEqual(point('f(1.0, [2.0]; upper) 3ff8000000000000'), {
    call: 'f(1.0, [2.0]; upper)',
    bits: '3ff8000000000000',
    value: 1.5,
  });
});

/**
 * The table from both sides, line by line.
 * @returns {Promise<{ call: string, native: number, browser: number, identical: boolean }[]>}
 */
async function bothSides() {
  const native = lines(execFileSync(NATIVE, { encoding: 'utf8', maxBuffer: 1 << 28 }));
  /** @type {string[]} */
  let browser = [];
  await withNumbers(async (page) => {
    browser = lines(await page.evaluate(() => /** @type {any} */ (window).numbers.table()));
  });
  assert(native.length > 5000, `only ${native.length} points`);
  assert.equal(browser.length, native.length, 'both have the same number of points');
  return native.map((line, index) => {
    const here = point(line);
    const there = point(browser[index] ?? '');
    assert.equal(there.call, here.call, 'both have the same points in the same order');
    return { call: here.call, native: here.value, browser: there.value, identical: here.bits === there.bits };
  });
}

test('native and WebAssembly agree to 1e-14 at every point of the table, and are the same in every bit', async (context) => {
  const points = await bothSides();
  const distances = points.map(({ native, browser }) => distance(native, browser));
  const identical = points.filter((point) => point.identical).length;
  const worst = Math.max(...distances);
  context.diagnostic(`${points.length} points, ${identical} identical in every bit; largest relative difference ${worst}`);
  /** @param {(typeof points)[0][]} some @param {string} what */
  const none = (some, what) => {
    const first = some.slice(0, 20).map(({ call, native, browser }) => `${call}: native ${native}, browser ${browser}`);
    assert.equal(some.length, 0, `${some.length} of ${points.length} points ${what}:\n${first.join('\n')}`);
  };
  none(
    points.filter((_, index) => (distances[index] ?? Infinity) > AGREEMENT),
    `differ by more than ${AGREEMENT}`,
  );
  // More than is promised: one libm and the same operations in the same order leave nothing to differ.
  none(
    points.filter((point) => !point.identical),
    'differ in their last bits',
  );
});
