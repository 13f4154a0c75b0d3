/** The harness sees what it is there to see: each page here does one thing that is forbidden, and is caught. */

import assert from 'node:assert/strict';
import { createHash } from 'node:crypto';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { after, test } from 'node:test';
import { openPage } from './harness.mjs';

const folder = mkdtempSync(join(tmpdir(), 'levelwise-caught-'));
after(() => rmSync(folder, { recursive: true, force: true }));

/**
 * What the harness says about a page with this script.
 * @param {string} script
 * @param {{ policy?: boolean, from?: 'file'|'http', quiet?: boolean }} [options] `quiet`: nothing is expected, and it is waited for once
 */
async function problemsOf(script, { policy = false, from = 'file', quiet = false } = {}) {
  const hash = createHash('sha256').update(script).digest('base64');
  const rules = `default-src 'none'; script-src 'sha256-${hash}'; worker-src blob:; img-src data:`;
  const meta = policy ? `<meta http-equiv="Content-Security-Policy" content="${rules}">` : '';
  const file = join(folder, 'page.html');
  const head = `<!doctype html><html><head><meta charset="utf-8">${meta}<link rel="icon" href="data:,"></head>`;
  writeFileSync(file, `${head}<body><script>${script}</script></body></html>`);
  const opened = await openPage({ from, file });
  try {
    // A hint such as "preconnect" is taken when the browser has nothing better to do: on a busy machine that is later.
    for (let tries = 0; ; tries += 1) {
      await new Promise((done) => setTimeout(done, 500));
      const found = (await opened.problems()).join('\n');
      if (found || quiet || tries === 9) return found;
    }
  } finally {
    await opened.close();
  }
}

/** @param {string} script */
const inWorker = (script) => `new Worker(URL.createObjectURL(new Blob([${JSON.stringify(script)}])))`;
const fetching = "fetch('http://elsewhere.example/data?x=1').catch(() => 0)";

for (const from of /** @type {const} */ (['file', 'http'])) {
  test(`a page that does nothing has no problem, from ${from}`, async () => {
    assert.equal(await problemsOf('let a = 1', { from, policy: true, quiet: true }), '');
  });
}

test('a request is caught', async () => {
  assert.match(await problemsOf(`setTimeout(() => ${fetching}, 100)`), /request: .*elsewhere\.example\/data/);
});

test('a request from a worker is caught', async () => {
  assert.match(await problemsOf(inWorker(fetching)), /request: .*elsewhere\.example\/data/);
});

test('a connection without a request is caught', async () => {
  const script = `setTimeout(() => { const link = document.createElement('link'); link.rel = 'preconnect';
    link.href = 'http://elsewhere.example/'; document.head.append(link) }, 100)`;
  assert.match(await problemsOf(script), /^connection from port/);
});

test('a violation of the policy is caught', async () => {
  assert.match(await problemsOf(fetching, { policy: true }), /policy: connect-src http:\/\/elsewhere/);
});

test('a violation of the policy in a worker is caught', async () => {
  assert.match(await problemsOf(inWorker(fetching), { policy: true }), /worker: .*connect-src/i);
});

test('a later violation in a worker is caught', async () => {
  const script = inWorker(`setTimeout(() => { try { eval('1') } catch {} }, 300)`);
  assert.match(await problemsOf(script, { policy: true }), /worker: .*script-src/i);
});

test('an error on the console is caught', async () => {
  assert.match(await problemsOf("console.error('so it goes')"), /console: so it goes/);
});

test('an error on the console of a worker is caught', async () => {
  assert.match(await problemsOf(inWorker("console.error('so it goes')")), /console: so it goes/);
});

test('an exception is caught', async () => {
  assert.match(await problemsOf("setTimeout(() => { throw new Error('broken') }, 50)"), /exception: .*broken/);
});

test('an exception in a worker is caught', async () => {
  assert.match(await problemsOf(inWorker("setTimeout(() => { throw new Error('broken') }, 50)")), /broken/);
});
