/**
 * Opens the built page in a fresh browser and watches it.
 *
 * Everything that the page promises not to do is collected as a *problem*: a request, a connection, a violation of
 * its policy, an error on the console, an exception, in the page or in its worker. `withPage` fails on any of them,
 * whatever the test itself looked at. `harness.test.mjs` shows that each kind is really seen.
 */

import assert from 'node:assert/strict';
import { createServer } from 'node:http';
import { createRequire } from 'node:module';
import { existsSync, mkdtempSync, readFileSync, readdirSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { recordEngine } from './engine-log.mjs';

const root = fileURLToPath(new URL('../../', import.meta.url));
/** @type {import('puppeteer-core').PuppeteerNode} */
const puppeteer = createRequire(new URL('../../www/package.json', import.meta.url))('puppeteer-core');

/** The built page. */
export const HTML = process.env.LEVELWISE_HTML ?? join(root, 'dist/levelwise.html');
/** The headless program. */
export const PROGRAM = process.env.LEVELWISE_PROGRAM ?? join(root, 'target/debug/levelwise');

/** How long after a test the page is still watched: a request sent at its very end would arrive in this time. */
const LAST_LOOK = 300;

/**
 * @typedef {object} Opened
 * @property {import('puppeteer-core').Page} page
 * @property {() => Promise<string[]>} problems everything seen that must not happen, so far
 * @property {(name: RegExp) => Promise<string>} downloaded the text of the newest saved file so named, waited for
 * @property {() => Promise<void>} close
 */

/**
 * The page in a browser of its own, with an empty profile, loaded.
 *
 * @param {object} options
 * @param {'file'|'http'} [options.from] where the page comes from
 * @param {string} [options.file] the page; the built one by default
 * @param {string} [options.hash] what follows `#` in its address
 * @param {string} [options.path] the path it is served under
 * @returns {Promise<Opened>}
 */
export async function openPage({ from = 'file', file = HTML, hash = '', path = '/some/where/levelwise.html' } = {}) {
  /** @type {string[]} */
  const found = [];
  const listener = await listen(readFileSync(file), path, found);
  const downloads = mkdtempSync(join(tmpdir(), 'levelwise-'));
  const browser = await launch(listener.port);
  const page = await browser.newPage();
  await watch(page, found, downloads);
  await recordEngine(page);
  const bare = from === 'file' ? pathToFileURL(file).href : `http://127.0.0.1:${listener.port}${path}`;
  const address = hash ? `${bare}#${hash}` : bare;
  page.on('request', (request) => {
    const url = request.url();
    const inside = url.startsWith('blob:') || url.startsWith('data:');
    if (!inside && url !== address && url !== bare) found.push(`request: ${url}`);
  });
  await page.goto(address, { waitUntil: 'load' });
  listener.loaded();
  return {
    page,
    async problems() {
      await new Promise((done) => setTimeout(done, LAST_LOOK));
      const seen = await page.evaluate(() => /** @type {any} */ (window).violations ?? []);
      return [...found, ...seen];
    },
    downloaded: (name) => downloaded(downloads, name),
    async close() {
      await browser.close();
      await listener.close();
      rmSync(downloads, { recursive: true, force: true });
    },
  };
}

/**
 * Opens the page, does `work` with it, and fails on any problem.
 * @param {Parameters<typeof openPage>[0]} options
 * @param {(opened: Opened) => Promise<void>} work
 */
export async function withPage(options, work) {
  const opened = await openPage(options);
  try {
    await work(opened);
    assert.deepEqual(await opened.problems(), []);
  } catch (error) {
    // A failed wait says little; what the page complained about says more.
    for (const problem of await opened.problems().catch(() => [])) console.error(`  seen: ${problem}`);
    throw error;
  } finally {
    await opened.close();
  }
}

/**
 * A browser whose every connection, to whatever host, ends at the listener on `port`. The hosts that the browser
 * itself calls, for the time and for updates, are made unknown to it; should the page ask for one of them, the
 * request is seen all the same, where the page makes it.
 * @param {number} port
 */
function launch(port) {
  return puppeteer.launch({
    executablePath: process.env.CHROMIUM ?? '/usr/bin/chromium',
    headless: true,
    args: [
      '--no-sandbox',
      '--disable-gpu',
      '--disable-quic',
      '--no-first-run',
      '--disable-background-networking',
      '--disable-component-update',
      '--disable-sync',
      '--window-size=1280,900',
      `--host-resolver-rules=MAP *.google.com ^NOTFOUND, MAP *.googleapis.com ^NOTFOUND, MAP * 127.0.0.1:${port}`,
    ],
    defaultViewport: { width: 1280, height: 900 },
  });
}

/**
 * A server for the page alone which notes every other request, and every connection once the page has loaded.
 * @param {Buffer} html
 * @param {string} path
 * @param {string[]} found
 */
async function listen(html, path, found) {
  let loaded = false;
  const server = createServer((request, response) => {
    if (loaded || request.url !== path) found.push(`request: ${request.method} ${request.headers.host}${request.url}`);
    response.writeHead(200, {
      'Content-Type': 'text/html; charset=utf-8',
      'Content-Security-Policy': "frame-ancestors 'none'",
      'Access-Control-Allow-Origin': '*',
      Connection: 'close',
    });
    response.end(request.url === path ? html : '');
  });
  server.on('connection', (socket) => {
    if (loaded) found.push(`connection from port ${socket.remotePort}`);
  });
  await new Promise((ready) => server.listen(0, '127.0.0.1', () => ready(undefined)));
  const address = server.address();
  assert(address && typeof address === 'object');
  return {
    port: address.port,
    loaded() {
      loaded = true;
    },
    close: () =>
      new Promise((closed) => {
        server.close(closed);
        server.closeAllConnections();
      }),
  };
}

/**
 * @param {import('puppeteer-core').Page} page
 * @param {string[]} found
 * @param {string} downloads
 */
async function watch(page, found, downloads) {
  page.on('console', (message) => {
    if (message.type() === 'error') found.push(`console: ${message.text()}`);
  });
  page.on('pageerror', (error) => found.push(`exception: ${error instanceof Error ? error.message : error}`));
  page.on('error', (error) => found.push(`crash: ${error.message}`));
  page.on('workercreated', (worker) => {
    // What the worker did before this moment is kept for whoever switches these on.
    const session = worker.client;
    session.on('Log.entryAdded', ({ entry }) => {
      if (entry.level === 'error') found.push(`console of the worker: ${entry.text}`);
    });
    noteIssues(session, found, ' in the worker');
    void session.send('Log.enable').catch(() => undefined);
    void session.send('Audits.enable').catch(() => undefined);
  });
  await page.evaluateOnNewDocument(() => {
    /** @type {string[]} */
    const violations = [];
    Object.defineProperty(window, 'violations', { value: violations });
    document.addEventListener('securitypolicyviolation', (event) => {
      violations.push(`policy: ${event.effectiveDirective} ${event.blockedURI}`);
    });
  });
  const session = await page.createCDPSession();
  noteIssues(session, found, '');
  await session.send('Audits.enable');
  await session.send('Browser.setDownloadBehavior', { behavior: 'allow', downloadPath: downloads });
}

/**
 * @param {import('puppeteer-core').CDPSession} session
 * @param {string[]} found
 * @param {string} where
 */
function noteIssues(session, found, where) {
  session.on('Audits.issueAdded', ({ issue }) => {
    const details = issue.details.contentSecurityPolicyIssueDetails;
    if (details) found.push(`policy${where}: ${details.violatedDirective} ${details.blockedURL ?? ''}`);
  });
}

/**
 * @param {string} folder
 * @param {RegExp} name
 */
async function downloaded(folder, name) {
  for (let tries = 0; tries < 100; tries += 1) {
    const file = readdirSync(folder).find((entry) => name.test(entry) && !entry.endsWith('.crdownload'));
    if (file) {
      const path = join(folder, file);
      const text = readFileSync(path, 'utf8');
      rmSync(path);
      return text;
    }
    await new Promise((done) => setTimeout(done, 50));
  }
  throw new Error(`no file ${name} was saved in 5 s`);
}

/** Refuses to start tests on a page that was not built. */
export function builtPage() {
  assert(existsSync(HTML), `${HTML} is not there: build it with cargo pack build`);
  return readFileSync(HTML, 'utf8');
}
