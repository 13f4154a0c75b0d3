/**
 * The text face: a cell's TOML in an editor, in a shadow root of its own so that the editor's style sheets are
 * constructed ones, which the page's policy admits.
 */

import { autocompletion, completionKeymap } from '@codemirror/autocomplete';
import { defaultKeymap, history, historyKeymap } from '@codemirror/commands';
import { HighlightStyle, StreamLanguage, syntaxHighlighting } from '@codemirror/language';
import { toml } from '@codemirror/legacy-modes/mode/toml';
import { lintGutter, lintKeymap, setDiagnostics } from '@codemirror/lint';
import { Annotation, EditorState, Transaction } from '@codemirror/state';
import { EditorView, drawSelection, keymap, lineNumbers } from '@codemirror/view';
import { tags } from '@lezer/highlight';
import { completionsAt } from './completion.js';
import { difference } from './difference.js';
import { h } from './dom.js';

/** @typedef {import('./messages.js').CellView} CellView */
/** @typedef {import('./completion.js').Known} Known */

/** How long a pause in typing is before the text is sent, in milliseconds. */
const PAUSE = 120;

const fromEngine = Annotation.define();

const look = EditorView.theme({
  '&': { backgroundColor: 'var(--sheet)', color: 'var(--ink)', fontSize: '0.875rem', maxHeight: '26rem' },
  '&.cm-focused': { outline: '2px solid var(--focus)', outlineOffset: '1px' },
  '.cm-scroller': { fontFamily: 'var(--mono)', lineHeight: '1.6', overflow: 'auto' },
  '.cm-content': { caretColor: 'var(--ink)', padding: '0.6rem 0' },
  '.cm-cursor': { borderLeftColor: 'var(--ink)' },
  '.cm-gutters': { backgroundColor: 'transparent', color: 'var(--soft)', border: 'none' },
  '.cm-selectionBackground, &.cm-focused > .cm-scroller > .cm-selectionLayer .cm-selectionBackground': { backgroundColor: 'var(--pick)' },
  '.cm-tooltip': { backgroundColor: 'var(--sheet)', color: 'var(--ink)', border: '1px solid var(--line-strong)', borderRadius: '4px' },
  '.cm-tooltip-autocomplete > ul > li': { padding: '0.2rem 0.6rem', lineHeight: '1.5' },
  '.cm-tooltip-autocomplete > ul > li[aria-selected]': { backgroundColor: 'var(--pick)', color: 'var(--ink)' },
  '.cm-completionDetail': { color: 'var(--soft)', fontStyle: 'normal' },
  '.cm-completionInfo': { maxWidth: '18rem', padding: '0.4rem 0.6rem' },
  '.cm-diagnostic-error': { borderLeftColor: 'var(--needs)' },
});

const colours = HighlightStyle.define([
  { tag: tags.comment, color: 'var(--soft)', fontStyle: 'italic' },
  { tag: tags.string, color: 'var(--text-string)' },
  { tag: [tags.number, tags.atom, tags.bool], color: 'var(--text-number)' },
  { tag: [tags.propertyName, tags.definition(tags.propertyName)], color: 'var(--accent)' },
]);

/**
 * An editor for one cell.
 * @param {{ label: string, text: string, known: () => Known, onText: (text: string) => void }} parts
 */
export function createTextFace({ label, text, known, onText }) {
  const element = h('div', { class: 'text-face' });
  const root = element.attachShadow({ mode: 'open' });
  /** @type {ReturnType<typeof setTimeout>|undefined} */
  let pause;

  const send = () => {
    if (pause === undefined) return;
    clearTimeout(pause);
    pause = undefined;
    onText(view.state.doc.toString());
  };
  const view = new EditorView({
    root,
    parent: root,
    state: EditorState.create({
      doc: text,
      extensions: [
        lineNumbers(),
        lintGutter(),
        history(),
        drawSelection(),
        EditorView.lineWrapping,
        EditorView.contentAttributes.of({ 'aria-label': label, spellcheck: 'false' }),
        StreamLanguage.define(toml),
        syntaxHighlighting(colours),
        look,
        autocompletion({ override: [completions(known)], icons: false }),
        keymap.of([...completionKeymap, ...historyKeymap, ...lintKeymap, ...defaultKeymap]),
        EditorView.updateListener.of((update) => {
          if (!update.docChanged || update.transactions.some((transaction) => transaction.annotation(fromEngine))) return;
          clearTimeout(pause);
          pause = setTimeout(send, PAUSE);
        }),
        EditorView.domEventHandlers({ blur: send }),
      ],
    }),
  });

  let marked = '';
  return {
    element,
    /** @param {CellView} now */
    draw(now) {
      if (pause === undefined) replaceText(view, now.text);
      const marks = marksOf(now, view.state.doc.length);
      const wanted = JSON.stringify(marks);
      if (wanted === marked) return;
      marked = wanted;
      view.dispatch(setDiagnostics(view.state, marks));
    },
    /** @param {number} [at] */
    focus(at) {
      if (at !== undefined) {
        const anchor = Math.min(at, view.state.doc.length);
        view.dispatch({ selection: { anchor }, scrollIntoView: true });
      }
      view.focus();
    },
    flush: send,
    destroy() {
      send();
      view.destroy();
    },
  };
}

/**
 * @param {() => Known} known
 * @returns {import('@codemirror/autocomplete').CompletionSource}
 */
function completions(known) {
  return (context) => {
    const line = context.state.doc.lineAt(context.pos);
    if (!context.explicit && line.text.trim() === '') return null;
    const found = completionsAt(context.state.doc.toString(), context.pos, known());
    return found ? { ...found, filter: true } : null;
  };
}

/**
 * Brings the engine's text into the editor by changing only what differs, so that the caret stays in its words.
 * @param {EditorView} view
 * @param {string} text
 */
function replaceText(view, text) {
  const changes = difference(view.state.doc.toString(), text.replace(/\r\n?/g, '\n'));
  if (!changes) return;
  view.dispatch({ changes, annotations: [fromEngine.of(true), Transaction.addToHistory.of(false)] });
}

/**
 * @param {CellView} cell
 * @param {number} length
 * @returns {import('@codemirror/lint').Diagnostic[]}
 */
function marksOf(cell, length) {
  return cell.diagnostics.map(({ start, end, message }) => {
    const from = Math.max(0, Math.min(start, length));
    return { from, to: Math.max(from, Math.min(end, length)), severity: 'error', message };
  });
}
