/**
 * A make-believe engine for trying the page's views without the real one. It is used by `page.mjs` alone and is in no
 * file that is handed out. Its answers are nonsense by design.
 */
const ANSWER = `<div class="a-answer"><p class="a-headline">Nothing is computed here</p><div class="a-table"><div class="a-scroll" role="region" tabindex="0" aria-label="Table: Made up"><table><caption>Made up, n = 3 &lt; 4</caption><thead><tr><td></td><th scope="col" class="a-n">mean</th><th scope="col" class="a-n">p</th></tr></thead><tbody><tr><th scope="row">none</th><td class="a-n">1.5</td><td class="a-n"><span class="a-absent" aria-hidden="true">–</span><span class="a-unseen">not available</span></td></tr></tbody></table></div></div><figure class="a-figure"><figcaption class="a-title">A figure</figcaption><svg xmlns="http://www.w3.org/2000/svg" class="a-drawing" viewBox="0 0 560 100" width="560" height="100" role="img" aria-label="made up" font-family="sans-serif"><rect class="a-ground" width="560" height="100" fill="#ffffff"></rect><line class="a-line" x1="10" y1="50" x2="500" y2="50" stroke="#0d6472" stroke-width="2"></line><circle class="a-hollow" cx="200" cy="50" r="6" fill="#ffffff" stroke="#0d6472"></circle><text class="a-words" x="10" y="80" fill="#1d2731" font-size="14">none</text></svg></figure><section class="a-writeup" aria-label="Write-up"><p>The groups differ.</p></section><section class="a-cautions" aria-label="Cautions"><ul><li>All of it is invented.</li></ul></section></div>`;
let ids = 0;
let cells = [];
let table = [];
const make = (kind, name, sentence, extra = {}) => ({ id: ++ids, kind, name, text: `kind = "${kind}"\nname = "${name}"\n`, condition: 'settled', sentence, diagnostics: [], headline: `Made up: ${kind}`, answer: ANSWER, writeup: 'The groups differ, F(2, 17) = 0.00, p = 0.000, all of it invented.', table_rows: null, revision: 1, ...extra });
const words = (text) => ({ type: 'words', text });
const blank = (field, value, shown, control, choices = [], extra = {}) => ({ type: 'blank', field, label: field, value, shown, control, choices: choices.map((c) => ({ value: c, label: c })), help: `What ${field} is for.`, is_default: value === '', problem: false, ...extra });
const sentenceOf = {
  data: () => [words('Read the table, with decimals written with '), blank('decimal', '', 'a point', 'choice', [',', '.']), words('.')],
  study: () => [words('Compare '), blank('outcome', '', 'choose', 'choice', ['score'], { is_default: false, problem: true }), words(' between '), blank('groups', 'arm', 'arm', 'choice', ['arm', 'score']), words(', taking '), blank('control', 'none', 'none', 'text', ['none', '15 min']), words(' as the control, at '), blank('alpha', '', '0.05', 'number'), words('.')],
};
const sentence = (kind) => (sentenceOf[kind] ?? (() => [blank('text', 'Some *words*.\nAnd more.', 'text', 'long')]))();
const post = (m) => self.postMessage(m);
const update = (seq, changed = cells, recomputed = []) => post({ type: 'update', seq, order: cells.map((c) => c.id), cells: changed, recomputed, settled: true, can_undo: true, can_redo: false });
const add = (kind, at, extra) => {
  const cell = make(kind, `${kind}-${ids + 1}`, sentence(kind), extra);
  cells.splice(at, 0, cell);
  return cell;
};
self.onmessage = ({ data: m }) => {
  const at = cells.findIndex((c) => c.id === m.cell);
  const cell = cells[at];
  switch (m.type) {
    case 'start': return post({ type: 'ready', version: 'fake', kinds: ['data', 'study', 'note'].map((name) => ({ name, purpose: `A ${name} cell`, fields: ['kind', 'name', 'unit'] })) });
    case 'open':
      cells = [];
      for (const text of m.text.split(/^\[\[cell\]\]\n/m).slice(1)) add(/kind = "(\w+)"/.exec(text)?.[1] ?? 'note', cells.length, { text });
      return update(m.seq);
    case 'add': add(m.kind, cells.findIndex((c) => c.id === m.after) + 1); return update(m.seq);
    case 'duplicate': add(cell.kind, at + 1); return update(m.seq);
    case 'remove': cells.splice(at, 1); return update(m.seq);
    case 'move': cells.splice(at, 1); cells.splice(m.to, 0, cell); return update(m.seq);
    case 'edit_text':
      if (m.text.includes('crash')) return post({ type: 'failed', message: 'asked to' });
      cells[at] = { ...cell, text: m.text, diagnostics: m.text.includes('bad') ? [{ message: 'Line 1: “bad” is not known.', start: 0, end: 4, line: 1, column: 1, field: null }] : [] };
      return update(m.seq, [cells[at]]);
    case 'set_field':
      cells[at] = { ...cell, sentence: cell.sentence.map((p) => (p.field === m.field ? { ...p, value: m.value, shown: m.value || 'default', is_default: m.value === '', problem: false } : p)), text: `${cell.text}${m.field} = "${m.value}"\n` };
      return update(m.seq, [cells[at]]);
    case 'rename': cells[at] = { ...cell, name: m.name }; return update(m.seq, [cells[at]]);
    case 'set_table': {
      table = m.text.trim().split(/\r?\n/).map((l) => l.split(/[\t,;]/));
      if (at >= 0) cells[at] = { ...cell, table_rows: table.length - 1, revision: cell.revision + 1 };
      else { add('data', cells.length, { table_rows: table.length - 1 }); add('study', cells.length); }
      return update(m.seq);
    }
    case 'set_value': table[m.row + 1][m.column] = m.value; cells[at] = { ...cell, revision: cell.revision + 1 }; return update(m.seq, [cells[at]]);
    case 'rows': return post({ type: 'rows', cell: m.cell, from: m.from, columns: table[0].map((name) => ({ name, type: name === 'arm' ? 'label' : 'number' })), total: table.length - 1, rows: table.slice(m.from + 1, m.from + 1 + m.count), excluded: [2] });
    case 'save': return post({ type: 'saved', text: cells.map((c) => `[[cell]]\n${c.text}`).join('\n') });
    default: return post({ type: 'refused', seq: m.seq, message: 'The make-believe engine cannot do that.' });
  }
};
