/**
 * What no policy can forbid is kept out of the page's own scripts: leaving for another address, and calls to other
 * machines that the policy would stop but that nobody should write in the first place.
 */

import assert from 'node:assert/strict';
import { readFileSync, readdirSync } from 'node:fs';
import { test } from 'node:test';
import { fileURLToPath } from 'node:url';

const www = fileURLToPath(new URL('../../www/', import.meta.url));

/** Each with the reason, and the files that may hold it. */
const FORBIDDEN = [
  { pattern: /\blocation\s*\.\s*(href|assign|replace)\b\s*[=(]|\blocation\s*=[^=]/, why: 'the page never leaves for another address' },
  { pattern: /\bwindow\s*\.\s*open\s*\(/, why: 'the page opens no other page' },
  { pattern: /\b(fetch|importScripts|sendBeacon)\s*\(/, why: 'the page asks no server for anything' },
  { pattern: /\bnew\s+(XMLHttpRequest|WebSocket|EventSource|WebTransport|BroadcastChannel|SharedWorker)\b/, why: 'the page connects to nothing' },
  { pattern: /\bnew\s+(webkit)?RTC/, why: 'the page calls no other machine' },
  { pattern: /\bimport\s*\(\s*[^'"\s]/, why: 'no code is loaded from a computed address' },
  { pattern: /\beval\s*\(|\bnew\s+Function\b/, why: 'no text becomes code' },
  { pattern: /\.(innerHTML|outerHTML)\s*=|insertAdjacentHTML|document\s*\.\s*write/, why: 'markup enters through the one policy', except: ['page/policy.js'] },
];

/**
 * Comments do not run.
 * @param {string} source
 */
function code(source) {
  return source.replace(/\/\*[^]*?\*\//g, (comment) => comment.replace(/[^\n]/g, ' ')).replace(/(^|\s)\/\/.*$/gm, '$1');
}

/** @param {string} source */
function objections(source, name = '') {
  const lines = code(source).split('\n');
  return FORBIDDEN.filter((rule) => !rule.except?.includes(name)).flatMap(({ pattern, why }) =>
    lines.flatMap((line, at) => (pattern.test(line) ? [`www/${name}:${at + 1}: ${why}: ${line.trim()}`] : [])),
  );
}

test('the scripts hold nothing that leaves the page', () => {
  const names = ['page', 'worker'].flatMap((folder) =>
    readdirSync(www + folder, { recursive: true, encoding: 'utf8' })
      .filter((name) => name.endsWith('.js'))
      .map((name) => `${folder}/${name}`),
  );
  assert(names.includes('worker/main.js'));
  assert.deepEqual(names.flatMap((name) => objections(readFileSync(www + name, 'utf8'), name)), []);
});

test('each forbidden thing is recognised, and comments and look-alikes are not', () => {
  for (const line of [
    "location.href = 'http://x.example'",
    'window.location = address',
    'location.assign(address)',
    "window.open('x')",
    "fetch('x')",
    'new WebSocket(x)',
    'new RTCPeerConnection()',
    'import(name)',
    "eval('1')",
    'new Function(x)',
    'element.innerHTML = x',
  ]) {
    assert.equal(objections(line).length, 1, line);
  }
  for (const line of ['if (location.hash === x)', '// fetch(x)', '/** fetch(x) */', 'refetch(x)', 'a.location == b']) {
    assert.deepEqual(objections(line), [], line);
  }
});

test('the lock file names no host that packages come from', () => {
  const lock = readFileSync(`${www}package-lock.json`, 'utf8');
  assert(!lock.includes('"resolved"'));
});
