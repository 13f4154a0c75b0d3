import assert from 'node:assert/strict';
import { test } from 'node:test';
import { decode } from '../page/decode.js';

const utf16 = (text, swap) => {
  const bytes = Buffer.from(text, 'utf16le');
  return new Uint8Array(swap ? bytes.swap16() : bytes);
};

test('UTF-8 is read with and without its mark', () => {
  assert.deepEqual(decode(new TextEncoder().encode('größe;1')), { text: 'größe;1', encoding: 'UTF-8' });
  assert.equal(decode(new Uint8Array([0xef, 0xbb, 0xbf, 0x61])).text, 'a');
});

test('UTF-16 is read in either order, with and without its mark', () => {
  for (const swap of [false, true]) {
    assert.deepEqual(decode(utf16('\uFEFFgröße\t1\n', swap)), { text: 'größe\t1\n', encoding: 'UTF-16' });
    assert.equal(decode(utf16('group,value\na,1\nb,2\n', swap)).text, 'group,value\na,1\nb,2\n');
  }
});

test('bytes that are not UTF-8 are read as Windows-1252', () => {
  // Node reads 0x80 to 0x9f of this encoding as control characters, browsers as they should; so none is in here.
  assert.deepEqual(decode(new Uint8Array([0x67, 0x72, 0xf6, 0xdf, 0x65])), { text: 'größe', encoding: 'Windows-1252' });
});

test('no bytes are no text', () => {
  assert.equal(decode(new Uint8Array()).text, '');
  assert.equal(decode(new Uint8Array([0x31])).text, '1');
});
