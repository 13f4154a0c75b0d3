/** The module of `tests/numbers` in a browser: a blank page from a file, with nothing but the module in it. */

import { createRequire } from 'node:module';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';

const root = fileURLToPath(new URL('../../', import.meta.url));
/** @type {import('puppeteer-core').PuppeteerNode} */
const puppeteer = createRequire(new URL('../../www/package.json', import.meta.url))('puppeteer-core');

/** The optimised module. */
export const WASM = process.env.LEVELWISE_NUMBERS_WASM ?? join(root, 'target/pack/numbers.wasm');
/** The JavaScript between the module and a page. */
export const GLUE = process.env.LEVELWISE_NUMBERS_GLUE ?? join(root, 'target/pack/numbers-glue-release.js');
/** The native program that prints the table. */
export const NATIVE = process.env.LEVELWISE_NUMBERS_PROGRAM ?? join(root, 'target/debug/levelwise-numbers');

/**
 * A page in a browser of its own in which the global `numbers` is the started module.
 * @param {(page: import('puppeteer-core').Page) => Promise<void>} work
 */
export async function withNumbers(work) {
  const folder = mkdtempSync(join(tmpdir(), 'levelwise-numbers-'));
  const browser = await puppeteer.launch({
    executablePath: process.env.CHROMIUM ?? '/usr/bin/chromium',
    headless: true,
    args: ['--no-sandbox', '--disable-gpu', '--no-first-run', '--disable-background-networking', '--disable-component-update'],
    // The whole table is one call.
    protocolTimeout: 600_000,
  });
  try {
    const file = join(folder, 'numbers.html');
    const module = readFileSync(WASM).toString('base64');
    const start = `const text = atob(document.getElementById('module').textContent);
      window.numbers = wasm_bindgen;
      window.started = wasm_bindgen({ module_or_path: Uint8Array.from(text, (letter) => letter.charCodeAt(0)) });`;
    writeFileSync(
      file,
      `<!doctype html><meta charset="utf-8"><script type="text/plain" id="module">${module}</script>
<script>${readFileSync(GLUE, 'utf8').replaceAll('</script', '<\\/script')}</script><script>${start}</script>`,
    );
    const page = await browser.newPage();
    await page.goto(pathToFileURL(file).href, { waitUntil: 'load' });
    await page.evaluate(async () => {
      await /** @type {any} */ (window).started;
    });
    await work(page);
  } finally {
    await browser.close();
    rmSync(folder, { recursive: true, force: true });
  }
}
