import assert from 'node:assert/strict';
import { test } from 'node:test';
import { EMPTY, afterChange, afterFailure, afterRecovery, afterTyping, afterUpdate, isStale, toggled, withRows } from '../page/state.js';
import { notebookFile, preambleOf } from '../page/keep.js';

const cell = (id, more = {}) => ({ id, kind: 'study', text: `kind = "study" # ${id}`, condition: 'settled', sentence: [], diagnostics: [], headline: '', answer: '', revision: 1, ...more });
const update = (seq, order, cells, more = {}) => ({ type: 'update', seq, order, cells, recomputed: [], settled: true, can_undo: false, can_redo: false, ...more });

test('a state is replaced, never changed', () => {
  const before = afterUpdate(EMPTY, update(1, [1, 2], [cell(1), cell(2)]));
  const kept = structuredClone(before);
  afterTyping(before, 1, 'x', 2);
  afterUpdate(before, update(2, [2], [cell(2, { headline: 'new' })]));
  afterFailure(before);
  assert.deepEqual(before, kept);
  assert.equal(EMPTY.cells.size, 0);
});

test('cells that an update does not name stay as they are, and those that are gone go', () => {
  const first = afterUpdate(EMPTY, update(1, [1, 2], [cell(1), cell(2)]));
  const second = afterUpdate(first, update(2, [1], [cell(1, { headline: 'new' })]));
  assert.deepEqual([...second.cells.keys()], [1]);
  assert.equal(second.cells.get(1).headline, 'new');
  const third = afterUpdate(first, update(2, [2, 1], []));
  assert.equal(third.cells.get(2), first.cells.get(2));
});

test('a text that is left out is the one known before', () => {
  const first = afterUpdate(EMPTY, update(1, [1], [cell(1, { text: 'long' })]));
  const second = afterUpdate(first, update(2, [1], [cell(1, { text: undefined, headline: 'h' })]));
  assert.equal(second.cells.get(1).text, 'long');
});

test('a cell says how far long work is while there is some, and no longer', () => {
  const first = afterUpdate(EMPTY, update(1, [1], [cell(1, { condition: 'working', headline: '4 %', progress: '4 %' })]));
  assert.equal(first.cells.get(1).progress, '4 %');
  assert.equal(afterUpdate(first, update(1, [1], [cell(1, { progress: null })])).cells.get(1).progress, '');
});

test('an answer to an older request does not undo newer typing', () => {
  let state = afterUpdate(EMPTY, update(1, [1], [cell(1)]));
  state = afterTyping(state, 1, 'abc', 3);
  assert.ok(isStale(state, 1));
  state = afterUpdate(state, update(2, [1], [cell(1, { text: 'ab' })]));
  assert.equal(state.cells.get(1).text, 'abc');
  state = afterUpdate(state, update(3, [1], [cell(1, { text: 'abc\n' })]));
  assert.equal(state.cells.get(1).text, 'abc\n');
  assert.ok(!isStale(state, 1));
  assert.ok(isStale(afterChange(state, 1, 4), 1));
});

test('a cell that was asked for gets the keyboard when it comes', () => {
  const first = afterUpdate(EMPTY, update(1, [1], [cell(1)]));
  const asked = { ...first, expecting: { seq: 5, known: first.order } };
  assert.equal(afterUpdate(asked, update(4, [1], [])).expecting, asked.expecting);
  const came = afterUpdate(asked, update(5, [1, 7], [cell(7)]));
  assert.deepEqual(came.focus, { cell: 7, part: 'sentence', stamp: 5 });
  assert.equal(came.expecting, null);
});

test('rows carry the revision of the cell that they were read from', () => {
  const state = afterUpdate(EMPTY, update(1, [1], [cell(1, { kind: 'data', revision: 4 })]));
  const rows = { type: 'rows', cell: 1, from: 0, columns: [], total: 0, rows: [], excluded: [] };
  assert.equal(withRows(state, rows).windows.get(1).revision, 4);
});

test('after a failure the cells, what was typed and the open texts are there, and a fresh engine gets them in order', () => {
  let state = afterUpdate(EMPTY, update(1, [4, 2], [cell(4), cell(2)]));
  state = { ...state, texts: toggled(state.texts, 2) };
  state = afterFailure(state);
  state = afterTyping(state, 4, 'typed meanwhile', 9);
  const file = notebookFile('', state.order.map((id) => state.cells.get(id)));
  assert.equal(file, 'levelwise = 1\n\n[[cell]]\ntyped meanwhile\n\n[[cell]]\nkind = "study" # 2\n');
  state = afterRecovery(state, [1, 2]);
  assert.deepEqual([...state.texts], [2]);
  assert.equal(state.engine, 'ready');
});

test('lines before the first cell are kept', () => {
  assert.equal(preambleOf('\uFEFF# mine\nlevelwise = 1\n\n[[cell]]\nkind = "note"\n'), '# mine\nlevelwise = 1');
  assert.equal(preambleOf(''), '');
});
