import assert from 'node:assert/strict';
import { test } from 'node:test';
import { exampleAsked } from '../page/address.js';
import { completionsAt } from '../page/completion.js';
import { difference } from '../page/difference.js';
import { moved } from '../page/grid-keys.js';
import { spaced } from '../page/spacing.js';
import { fileKind, fileStem, looksLikeTable, notebookName, tabSeparated } from '../page/tables.js';

const blank = (field, choices, control = 'choice') => ({ type: 'blank', field, label: field, value: '', shown: '', control, help: '', is_default: true, problem: false, choices: choices.map((value) => ({ value, label: value })) });
const study = { kinds: ['note', 'study'], fields: ['outcome', 'unit'], sentence: [{ type: 'words', text: 'Compare ' }, blank('outcome', ['words recalled', 'age']), blank('control', ['none', '15 min'], 'text'), blank('alpha', ['0.05'], 'number')] };
const at = (marked) => completionsAt(marked.replace('|', ''), marked.indexOf('|'), study);
const labels = (found) => found?.options.map((option) => option.label);

test('at the start of a line the fields that are not given yet are offered', () => {
  assert.deepEqual(labels(at('kind = "study"\noutcome = "age"\nco|')), ['control', 'alpha', 'unit']);
  assert.equal(at('kind = "study"\nco|').from, 15);
});

test('after the equals sign the choices of that field are offered, in quotes unless they are numbers', () => {
  assert.deepEqual(labels(at('outcome = |')), ['"words recalled"', '"age"']);
  assert.deepEqual(labels(at('alpha = |')), ['0.05']);
  assert.deepEqual(labels(at('kind = "st|')), ['"note"', '"study"']);
  assert.equal(at('outcome = "wo|').from, 10);
  assert.deepEqual(labels(at('control = ["none",\n  "1|')), ['"none"', '"15 min"']);
});

test('the parts of a sentence get their spaces', () => {
  const words = (text) => ({ type: 'words', text });
  const sentence = spaced([words('Study'), blank('outcome', []), words('over the levels of'), blank('groups', []), words('. Levels:'), blank('levels', []), blank('scores', []), words('.')]);
  assert.deepEqual(sentence.words, ['Study ', ' over the levels of ', ' Levels: ', ' ', '']);
  assert.deepEqual(sentence.tails, ['', '.', '', '.']);
  assert.deepEqual(spaced([blank('text', [])]).words, ['', '']);
});

test('inside a long text, and for a field without choices, nothing is offered', () => {
  assert.equal(at('text = """\nou|'), null);
  assert.equal(at('unit = "|'), null);
  assert.equal(at('outcome = "age" "|'), null);
});

test('the difference of two texts is the smallest single replacement', () => {
  for (const [before, after] of [['abc', 'abc'], ['abc', 'abXc'], ['aaa', 'aa'], ['', 'x'], ['x', ''], ['a😀b', 'a😁b'], ['😀', '😀😀']]) {
    const found = difference(before, after);
    const result = found ? before.slice(0, found.from) + found.insert + before.slice(found.to) : before;
    assert.equal(result, after);
    if (found) assert.ok(found.insert.isWellFormed(), `${before} to ${after}`);
  }
  assert.deepEqual(difference('alpha = 1', 'alpha = 15'), { from: 9, to: 9, insert: '5' });
});

test('keys lead through the grid and stop at its edges', () => {
  const size = { rows: 10, columns: 3, page: 4 };
  const press = (key, from, more = {}) => moved({ key, ctrlKey: false, metaKey: false, altKey: false, ...more }, from, size);
  assert.deepEqual(press('ArrowUp', { row: 0, column: 1 }), { row: 0, column: 1 });
  assert.deepEqual(press('PageDown', { row: 8, column: 1 }), { row: 9, column: 1 });
  assert.deepEqual(press('End', { row: 2, column: 0 }, { ctrlKey: true }), { row: 9, column: 2 });
  assert.deepEqual(press('Home', { row: 2, column: 2 }), { row: 2, column: 0 });
  assert.equal(press('x', { row: 0, column: 0 }), null);
  assert.equal(press('ArrowDown', { row: 0, column: 0 }, { altKey: true }), null);
});

test('one value is no table, two lines or a tab are', () => {
  assert.ok(!looksLikeTable('12.5\n'));
  assert.ok(looksLikeTable('a\tb'));
  assert.ok(looksLikeTable('a\n1'));
  assert.equal(tabSeparated([['a', ' b\n c'], ['1', '']]), 'a\tb c\n1\t');
});

test('files are told apart by their names', () => {
  assert.deepEqual(['a.levelwise.toml', 'a.CSV', 'a.xlsx', 'a.pdf'].map(fileKind), ['notebook', 'table', 'workbook', 'unknown']);
  assert.equal(notebookName('Recall.levelwise.toml'), 'Recall');
  assert.equal(notebookName('.toml'), 'notebook');
  assert.equal(fileStem(' a/b: c?\n'), 'a b c');
  assert.equal(fileStem('..'), 'notebook');
});

test('the address can ask for an example', () => {
  assert.equal(exampleAsked('#example'), '');
  assert.equal(exampleAsked('#example=a%20b'), 'a b');
  assert.equal(exampleAsked('#example=%'), '');
  assert.equal(exampleAsked('#protocol'), null);
});
