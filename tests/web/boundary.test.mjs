/**
 * The boundary between page and engine, one test for each kind of request, through real JavaScript values: the worker's
 * own source and the engine's own module, as they stand in the built file, without a browser around them.
 */

import assert from 'node:assert/strict';
import { test } from 'node:test';
import vm from 'node:vm';
import { gunzipSync } from 'node:zlib';
import { builtPage } from './harness.mjs';

const html = builtPage();

/** @param {string} id */
function block(id) {
  const found = html.match(new RegExp(`<script type="[^"]*" id="${id}">([^]*?)</script>`));
  assert(found?.[1], `the file has a block "${id}"`);
  return found[1];
}

const module = new WebAssembly.Module(gunzipSync(Buffer.from(block('engine'), 'base64')));
const source = block('worker').replaceAll('<\\/script', '</script');

/** @typedef {Record<string, any>} Message */

/** The queue between two slices; node's own channel would keep the test running for ever. */
class Channel {
  /** @type {{ onmessage: ((event: { data: unknown }) => void)|null }} */
  port1 = { onmessage: null };
  port2 = { postMessage: (/** @type {unknown} */ data) => void setImmediate(() => this.port1.onmessage?.({ data })) };
}

/** A worker in a bare world, with what it posts. */
function worker() {
  /** @type {Message[]} */
  const posted = [];
  /** @type {any} */
  const self = { postMessage: (/** @type {Message} */ message) => posted.push(structuredClone(message)), close: () => undefined };
  const world = vm.createContext({ self, console, TextDecoder, TextEncoder, MessageChannel: Channel, WebAssembly, structuredClone, performance });
  vm.runInContext(source, world);
  let seq = 0;
  const settled = () => posted.some((message) => message['type'] === 'update' && message['seq'] === seq && message['settled']);
  return {
    posted,
    start: () => self.onmessage({ data: { type: 'start', module } }),
    /** Sends a request and gives what is posted until it is answered. @param {Message} request */
    async ask(request) {
      seq += 1;
      const from = posted.length;
      self.onmessage({ data: { ...request, seq } });
      const done = () => posted.slice(from).some((message) => message['type'] !== 'update') || settled();
      for (let turn = 0; turn < 500 && !done(); turn += 1) await new Promise((next) => setTimeout(next, 2));
      assert(done(), `${request['type']} is answered`);
      return posted.slice(from);
    },
  };
}

const NOTEBOOK = `levelwise = 1

[[cell]]
kind = "data"
name = "d"
table = '''
arm,score
a,1
a,2
b,4
b,6
'''

[[cell]]
kind = "study"
name = "s"
data = "d"
outcome = "score"
groups = "arm"
levels = ["a", "b"]

[[cell]]
kind = "comparisons"
name = "ü"
study = "s"
`;

async function opened() {
  const engine = worker();
  engine.start();
  const messages = await engine.ask({ type: 'open', text: NOTEBOOK });
  return { ...engine, messages };
}

/** The newest view of a cell. @param {Message[]} messages @param {number} id */
const view = (messages, id) => messages.flatMap((message) => message['cells'] ?? []).findLast((cell) => cell.id === id);
/** @param {Message[]} messages */
const last = (messages) => messages.at(-1) ?? {};

test('start says ready with the version and every kind of cell', () => {
  const engine = worker();
  engine.start();
  const [ready] = engine.posted;
  assert.equal(ready?.['type'], 'ready');
  assert.match(ready?.['version'], /^\d+\.\d+\.\d+$/);
  assert.deepEqual(ready?.['kinds'].map((/** @type {Message} */ kind) => kind['name']), ['note', 'data', 'summary', 'study', 'profile', 'overall', 'comparisons', 'trend', 'power']);
});

test('open gives every cell with its text, sentence, condition and answer', async () => {
  const { messages } = await opened();
  const { order, recomputed, can_undo: canUndo, notice } = last(messages);
  assert.equal(order.length, 3);
  assert.deepEqual([canUndo, notice], [false, null]);
  assert(messages.flatMap((message) => message['recomputed'] ?? []).length === 3 && Array.isArray(recomputed));
  const cell = view(messages, order[2]);
  assert.deepEqual([cell.kind, cell.name, cell.condition, cell.table_rows], ['comparisons', 'ü', 'settled', null]);
  assert.equal(cell.text, 'kind = "comparisons"\nname = "ü"\nstudy = "s"\n');
  assert(cell.sentence.some((/** @type {Message} */ part) => part['type'] === 'blank' && part['field'] === 'family' && part['is_default'] === true));
  assert.match(cell.answer, /^<div class="a-answer"/);
  assert.equal(view(messages, order[0]).table_rows, 4);
});

test('a text that is no notebook is refused and the open one stays', async () => {
  const { ask } = await opened();
  const refused = last(await ask({ type: 'open', text: 'a,b\n1,2\n' }));
  assert.deepEqual([refused['type'], refused['seq']], ['refused', 2]);
  assert.match(last(await ask({ type: 'save' }))['text'], /name = "ü"/);
});

test('edit_text reports problems at UTF-16 positions', async () => {
  const { ask, messages } = await opened();
  const id = last(messages)['order'][2];
  const cell = view(await ask({ type: 'edit_text', cell: id, text: 'kind = "comparisons"\nname = "🙂" # ü\nstdy = "s"\n' }), id);
  assert.equal(cell.condition, 'needs you');
  const [problem] = cell.diagnostics;
  assert.equal(cell.text.slice(problem.start, problem.end), 'stdy');
  assert.deepEqual([problem.line, problem.column, problem.field], [3, 1, 'stdy']);
});

test('set_field, undo and redo go through the text and come back', async () => {
  const { ask, messages } = await opened();
  const id = last(messages)['order'][2];
  const changed = view(await ask({ type: 'set_field', cell: id, field: 'adjust', value: 'Holm' }), id);
  assert.match(changed.text, /adjust = "Holm"/);
  const undone = await ask({ type: 'undo' });
  assert.doesNotMatch(view(undone, id).text, /adjust/);
  assert.deepEqual([last(undone)['can_undo'], last(undone)['can_redo']], [false, true]);
  assert.deepEqual(undone.flatMap((message) => message['recomputed'] ?? []), []);
  assert.match(view(await ask({ type: 'redo' }), id).text, /adjust = "Holm"/);
});

test('add, duplicate, move, rename and remove change the order and the names', async () => {
  const { ask, messages } = await opened();
  const [data, study, comparisons] = last(messages)['order'];
  const added = last(await ask({ type: 'add', kind: 'trend', after: study }))['order'];
  assert.equal(added.length, 4);
  assert.equal(added[1], study);
  const doubled = await ask({ type: 'duplicate', cell: comparisons });
  const copy = last(doubled)['order'].at(-1);
  assert.equal(view(doubled, copy).name, 'ü 2');
  assert.deepEqual(last(await ask({ type: 'move', cell: copy, to: 0 }))['order'][0], copy);
  const renamed = await ask({ type: 'rename', cell: data, name: 'table' });
  assert.match(view(renamed, study).text, /data = "table"/);
  assert(!last(await ask({ type: 'remove', cell: copy }))['order'].includes(copy));
  const refused = last(await ask({ type: 'rename', cell: study, name: 'table' }));
  assert.match(refused['message'], /called "table" already/);
});

test('rows, set_value and set_table read and change the table', async () => {
  const { ask, messages } = await opened();
  const [data, study] = last(messages)['order'];
  const rows = last(await ask({ type: 'rows', cell: data, from: 1, count: 2 }));
  assert.deepEqual(
    [rows['from'], rows['total'], rows['rows'], rows['columns'], rows['excluded']],
    [1, 4, [['a', '2'], ['b', '4']], [{ name: 'arm', type: 'label' }, { name: 'score', type: 'number' }], []],
  );
  const changed = await ask({ type: 'set_value', cell: data, row: 1, column: 1, value: '2.5' });
  assert.match(view(changed, data).text, /\na,2\.5\n/);
  const pasted = await ask({ type: 'set_table', cell: data, text: 'arm\tscore\r\na\t1\r\na\t3\r\nb\t9\r\nb\t8' });
  assert.equal(view(pasted, data).table_rows, 4);
  assert.equal(view(pasted, study).condition, 'settled');
  const fresh = last(await ask({ type: 'set_table', cell: null, text: 'x,y\n1,2\n' }));
  assert.equal(fresh['order'].length, 4, 'a study is there already');
  assert.equal(last(await ask({ type: 'set_value', cell: data, row: 99, column: 0, value: '' }))['type'], 'refused');
});

test('save gives the file that was opened, report a document that loads nothing', async () => {
  const { ask } = await opened();
  assert.equal(last(await ask({ type: 'save' }))['text'], NOTEBOOK);
  const { type, html: report } = last(await ask({ type: 'report', date: '1 December 2026' }));
  assert.equal(type, 'report');
  assert.match(report, /^<!DOCTYPE html>[^]*Content-Security-Policy[^]*default-src &#39;none&#39;|^<!DOCTYPE html>[^]*default-src 'none'/);
  assert.match(report, /1 December 2026/);
});

test('what the engine does not know is refused in words, and it goes on', async () => {
  const { ask } = await opened();
  for (const request of [{ type: 'dance' }, { type: 'edit_text', cell: 'x', text: 1 }, { type: 'remove', cell: 4711 }, {}]) {
    assert.equal(last(await ask(request))['type'], 'refused', JSON.stringify(request));
  }
  assert.equal(last(await ask({ type: 'save' }))['text'], NOTEBOOK);
});

test('a long text is not sent again while it stays the same', async () => {
  const engine = worker();
  engine.start();
  const rows = Array.from({ length: 6000 }, (_, i) => `a${i % 3},${i % 17}`).join('\n');
  const messages = await engine.ask({ type: 'open', text: `levelwise = 1\n\n[[cell]]\nkind = "data"\nname = "d"\ntable = '''\narm,score\n${rows}\n'''\n` });
  const [id] = last(messages)['order'];
  assert(view(messages, id).text.length > 20_000);
  const [note] = last(await engine.ask({ type: 'add', kind: 'note', after: null }))['order'];
  // A second cell of the same name above it: the long cell is told again, with what is wrong now.
  const told = view(await engine.ask({ type: 'edit_text', cell: note, text: 'kind = "note"\nname = "d"\ntext = "x"\n' }), id);
  assert.equal(told.condition, 'needs you');
  assert(!('text' in told));
});
