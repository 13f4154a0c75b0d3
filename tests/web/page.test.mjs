/** The single file opens, its engine answers, and it is what it says it is. */

import assert from 'node:assert/strict';
import { createHash } from 'node:crypto';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { test } from 'node:test';
import { builtPage, openPage, withPage } from './harness.mjs';

const html = builtPage();

/** @param {RegExp} pattern */
function every(pattern) {
  return [...html.matchAll(pattern)];
}

test('one style and one script are code, and the policy names the hash of each', () => {
  const policy = every(/<meta http-equiv="Content-Security-Policy" content="([^"]*)">/g);
  assert.equal(policy.length, 1);
  const rules = policy[0]?.[1] ?? '';
  for (const [pattern, directive] of /** @type {const} */ ([
    [/<style[^>]*>([^]*?)<\/style>/g, 'style-src'],
    [/<script>([^]*?)<\/script>/g, 'script-src'],
  ])) {
    const parts = every(pattern);
    assert.equal(parts.length, 1, directive);
    const hash = createHash('sha256').update(parts[0]?.[1] ?? '').digest('base64');
    assert(rules.includes(`${directive} 'sha256-${hash}'`), directive);
  }
  const kinds = every(/<script([^>]*)>/g).map((found) => found[1]).filter((attributes) => attributes !== '');
  for (const attributes of kinds) assert.match(attributes ?? '', / type="(text\/plain|application\/octet-stream)"/);
});

test('the policy allows no connection and stands before anything it could miss', () => {
  assert.match(html, /^<!doctype html>\s*<html[^>]*>\s*<head>\s*<meta charset="utf-8">\s*<meta http-equiv="Content-Sec/i);
  for (const rule of ["default-src 'none'", "connect-src 'none'", "form-action 'none'", "base-uri 'none'"]) {
    assert(html.includes(rule), rule);
  }
  assert(html.includes("require-trusted-types-for 'script'; trusted-types app"));
  assert(!/unsafe-(inline|eval|hashes)/.test(html.match(/content="default-src[^"]*"/)?.[0].replace("'wasm-unsafe-eval'", '') ?? 'unsafe-inline'));
});

test('the file names no path of the machine that it was built on', () => {
  assert(!/\/(home|root|work|Users)\/[a-z.]/.test(html.replace(/<script type="application[^]*?<\/script>/g, '')));
});

test('the licences of what is inside are inside', () => {
  const notices = html.match(/<script type="text\/plain" id="licences">([^]*?)<\/script>/)?.[1] ?? '';
  for (const name of ['Levelwise', 'The Rust standard library', 'wasm-bindgen 0.2.130', 'libm ', 'toml_edit ']) {
    assert(notices.includes(name), name);
  }
});

for (const from of /** @type {const} */ (['file', 'http'])) {
  test(`the page opens from ${from} and its engine is ready, with nothing to complain about`, async () => {
    await withPage({ from }, async ({ page }) => {
      assert.equal(await page.title(), 'Levelwise');
      await page.waitForFunction(() => /** @type {any} */ (window).engineLog.some((/** @type {any} */ entry) => entry.type === 'ready'));
      assert.equal(page.workers().length, 1);
    });
  });
}

test('a file that was changed on its way does not run', async () => {
  const folder = mkdtempSync(join(tmpdir(), 'levelwise-changed-'));
  const file = join(folder, 'levelwise.html');
  writeFileSync(file, html.replace(/<script>/, '<script>;'));
  const opened = await openPage({ file });
  try {
    assert.match((await opened.problems()).join('\n'), /policy: script-src/);
    assert.equal(opened.page.workers().length, 0);
  } finally {
    await opened.close();
    rmSync(folder, { recursive: true });
  }
});
