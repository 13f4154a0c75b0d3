import assert from 'node:assert/strict';
import { test } from 'node:test';
import { columnWidths } from '../page/grid-parts.js';
import { TALLEST, bodyHeight, scrollToRow, visibleRows } from '../page/scroll.js';

const small = { total: 100, rowHeight: 28, viewHeight: 280 };
const huge = { total: 5_000_000, rowHeight: 28, viewHeight: 280 };

test('a short table scrolls pixel by pixel', () => {
  assert.equal(bodyHeight(small), 2800);
  assert.deepEqual(visibleRows(small, 0), { first: 0, count: 11, top: 0 });
  assert.deepEqual(visibleRows(small, 30), { first: 1, count: 11, top: 28 });
  assert.equal(visibleRows(small, 2520).first + visibleRows(small, 2520).count, 100);
});

test('a table of five million rows keeps to the tallest element, and its first and last row can be reached', () => {
  assert.equal(bodyHeight(huge), TALLEST);
  assert.equal(visibleRows(huge, 0).first, 0);
  const end = visibleRows(huge, TALLEST - huge.viewHeight);
  assert.equal(end.first + end.count, huge.total);
  const bottom = end.top + end.count * huge.rowHeight;
  assert.ok(Math.abs(bottom - TALLEST) < 1, `the last row ends at ${bottom}`);
});

test('every row can be brought into view from the top and from the bottom', () => {
  for (const extent of [small, huge, { total: 1, rowHeight: 28, viewHeight: 280 }]) {
    for (const part of [0, 0.123, 0.5, 0.999, 1]) {
      const row = Math.round(part * (extent.total - 1));
      for (const from of [0, bodyHeight(extent) - extent.viewHeight]) {
        const top = scrollToRow(extent, Math.max(0, from), row);
        const seen = visibleRows(extent, top);
        assert.ok(row >= seen.first && row < seen.first + seen.count, `row ${row} of ${extent.total}`);
        const y = seen.top + (row - seen.first) * extent.rowHeight - top;
        assert.ok(y > -1 && y + extent.rowHeight < extent.viewHeight + 1, `row ${row} stands at ${y}`);
      }
    }
  }
});

test('a row in view does not move the table', () => {
  assert.equal(scrollToRow(small, 56, 5), 56);
});

test('columns grow with their values and never shrink while the same table is shown', () => {
  const window = (rows) => ({ type: 'rows', cell: 1, from: 0, total: 3, excluded: [], columns: [{ name: 'arm', type: 'label' }], rows });
  const first = columnWidths([], window([['a'.repeat(15)]]));
  assert.deepEqual(first, [8, 17]);
  assert.deepEqual(columnWidths(first, window([['b']])), first);
  assert.deepEqual(columnWidths(first, window([['c'.repeat(500)]])), [8, 32]);
});
