import assert from 'node:assert/strict';
import { readFileSync } from 'node:fs';
import { test } from 'node:test';
import vm from 'node:vm';

/** The worker's script with a make-believe engine, and what it posted. */
function startWorker(Session) {
  const posted = [];
  const ports = { port1: { onmessage: null }, port2: { postMessage: () => setImmediate(() => ports.port1.onmessage()) } };
  let closed = false;
  const self = { postMessage: (message) => posted.push(message), close: () => (closed = true), onmessage: null };
  const quiet = { error: () => {} };
  const scope = { self, console: quiet, MessageChannel: function () { return ports; }, wasm_bindgen: { initSync: () => {}, Session } };
  vm.runInNewContext(readFileSync(new URL('../worker/main.js', import.meta.url), 'utf8'), scope);
  return { posted, console: quiet, isClosed: () => closed, send: (data) => self.onmessage({ data }) };
}

const turn = () => new Promise((resolve) => setImmediate(resolve));

test('a newer edit is heard between two slices', async () => {
  const log = [];
  const worker = startWorker(class {
    handle(request) { log.push(request.type); }
    advance() { log.push('slice'); return log.length < 8; }
  });
  worker.send({ type: 'start', module: null });
  worker.send({ type: 'open', seq: 1 });
  await turn();
  await turn();
  worker.send({ type: 'edit_text', seq: 2 });
  for (let i = 0; i < 12; i += 1) await turn();
  assert.equal(log[0], 'open');
  assert.ok(log.indexOf('edit_text') > log.indexOf('slice') && log.lastIndexOf('slice') > log.indexOf('edit_text'), log.join(' '));
  assert.equal(log.length, 8, 'work stops when none is left');
});

test('an engine that fails says its last words and is not used again', async () => {
  let worker;
  let handled = 0;
  worker = startWorker(class {
    handle() {
      handled += 1;
      worker.console.error('panicked at the first hurdle');
      throw new Error('unreachable');
    }
    advance() { return false; }
  });
  worker.send({ type: 'start', module: null });
  worker.send({ type: 'open', seq: 1 });
  worker.send({ type: 'save', seq: 2 });
  await turn();
  assert.deepEqual(JSON.parse(JSON.stringify(worker.posted)), [{ type: 'failed', message: 'panicked at the first hurdle' }]);
  assert.equal(handled, 1);
  assert.ok(worker.isClosed());
});
