import assert from 'node:assert/strict';
import { test } from 'node:test';
import { objection } from '../page/markup.js';

test('what the engine writes passes', () => {
  for (const html of [
    '',
    'plain text &lt;b&gt;',
    '<div class="a-answer"><p class="a-headline">F = 3 &lt; 4</p><br /><hr /></div>',
    '<div role="region" tabindex="0" aria-label="Table: a &gt; b"><table><caption>T</caption><tr><th scope="col" class="a-n">p</th></tr></table></div>',
    '<svg xmlns="http://www.w3.org/2000/svg" class="a-drawing" viewBox="0 0 10 10" width="10"><g><title>x</title><path d="M0 0" fill="none"></path></g></svg>',
    '<p><a href="#cell-3">there</a></p>',
    '<ol start="3"><li>three</li></ol>',
    '<rect fill="url(#hatch)"></rect>',
    '<!-- a remark --><p>text</p>',
  ]) {
    assert.equal(objection(html), null, html);
  }
});

test('what could fetch, run or lead away is refused', () => {
  for (const html of [
    '<link rel="preconnect" href="http://example.org">',
    '<iframe></iframe>',
    '<form action="x"></form>',
    '<meta http-equiv="refresh">',
    '<base href="/">',
    '<object data="x"></object>',
    '<script>1</script>',
    '<SCRIPT>1</SCRIPT>',
    '<style>p{}</style>',
    '<img src="data:,">',
    '<p onclick="x()">',
    '<p ONCLICK="x()">',
    '<svg><animate attributeName="href"></animate></svg>',
    '<svg><a xlink:href="http://example.org"></a></svg>',
    '<a href="http://example.org">x</a>',
    '<a href="javascript:x">x</a>',
    '<a href=" #x">x</a>',
    '<p style="background:url(x)">',
    '<rect fill="url(http://example.org/#x)"></rect>',
    '<input type="text">',
    '<video src="x"></video>',
  ]) {
    assert.notEqual(objection(html), null, html);
  }
});

test('markup that a browser would mend in its own way is refused', () => {
  for (const html of ['<p class=x>', "<p class='x'>", '<p class="a"onclick="x">', '<p', '< p>', '<p/onclick="x">', '<![CDATA[x]]>', '<!doctype html>', '<?xml?>', '<p title="<b">']) {
    assert.notEqual(objection(html), null, html);
  }
});
