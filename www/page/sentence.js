/**
 * The sentence face: words with blanks in them. Every blank is a native control as wide as what stands in it.
 *
 * What a person is typing is not overwritten: a control with unsent typing keeps it until it has been sent.
 */

import { arrange, freshId, h, setText } from './dom.js';
import { severalField } from './several.js';
import { spaced } from './spacing.js';

/** @typedef {import('./messages.js').Part} Part */
/** @typedef {import('./messages.js').Blank} Blank */
/** @typedef {import('./messages.js').Diagnostic} Diagnostic */
/** @typedef {HTMLInputElement|HTMLSelectElement|HTMLTextAreaElement|HTMLButtonElement} Control */

/** How long a pause in typing is before it is sent, in milliseconds. */
const PAUSE = 450;

/**
 * @typedef {object} Field
 * @property {HTMLElement} element the blank, and the punctuation that stays with it
 * @property {Text} tail
 * @property {Control} control
 * @property {string} shape two blanks with the same shape can share a control
 * @property {(blank: Blank, problem: string, stale: boolean) => void} draw
 * @property {() => void} send what has been typed and not been sent
 */

/**
 * The sentence of one cell.
 * @param {(field: string, value: string) => void} onChange
 */
export function createSentence(onChange) {
  const element = h('div', { class: 'sentence' });
  const help = h('p', { class: 'help', id: freshId('help'), hidden: true });
  /** @type {Map<string, Field>} */
  let fields = new Map();
  /** @type {Text[]} */
  let words = [];

  /**
   * @param {readonly Part[]} parts
   * @param {readonly Diagnostic[]} diagnostics
   * @param {boolean} stale the engine has not yet answered the newest change of this cell
   */
  function draw(parts, diagnostics, stale) {
    /** @type {Map<string, Field>} */
    const next = new Map();
    const { words: stretches, blanks, tails } = spaced(parts);
    words = stretches.map((stretch, i) => {
      const node = words[i] ?? document.createTextNode('');
      setText(node, stretch);
      return node;
    });
    const nodes = words.flatMap((node, i) => {
      const blank = blanks[i];
      if (!blank) return [node];
      const old = fields.get(blank.field);
      const field = old?.shape === blank.control ? old : makeField(blank, help, onChange);
      next.set(blank.field, field);
      setText(field.tail, tails[i] ?? '');
      return [node, field.element];
    });
    const back = focusKeeper(element);
    for (const [name, field] of fields) if (next.get(name) !== field) field.send();
    fields = next;
    arrange(element, nodes);
    for (const blank of blanks) {
      const problem = diagnostics.find((diagnostic) => diagnostic.field === blank.field)?.message ?? '';
      fields.get(blank.field)?.draw(blank, problem, stale);
    }
    back(fields);
  }

  return {
    element,
    help,
    draw,
    /** Puts the keyboard into the first blank that has a problem or is not filled in, else the first one. */
    focus() {
      const all = [...fields.values()].map((field) => field.control);
      const first = all.find((control) => control.matches('.open, [aria-invalid="true"]')) ?? all[0];
      first?.focus();
      return first !== undefined;
    },
    /** Sends what has been typed and not been sent yet. */
    flush() {
      for (const field of fields.values()) field.send();
    },
  };
}

/**
 * Remembers which blank has the keyboard; the function it returns gives it back if the drawing took it away.
 * @param {HTMLElement} element
 */
function focusKeeper(element) {
  const active = /** @type {Control|null} */ (element.contains(document.activeElement) ? document.activeElement : null);
  const name = active?.dataset['field'];
  return (/** @type {ReadonlyMap<string, Field>} */ fields) => {
    if (!active || name === undefined || document.activeElement === active) return;
    fields.get(name)?.control.focus();
  };
}

/**
 * @param {Blank} blank
 * @param {HTMLElement} help
 * @param {(field: string, value: string) => void} onChange
 * @returns {Field}
 */
function makeField(blank, help, onChange) {
  const make = { choice: choiceField, several: severalField }[/** @type {string} */ (blank.control)] ?? typedField;
  const field = make(blank, onChange);
  const drawField = field.draw;
  const { control } = field;
  control.dataset['field'] = blank.field;
  const showHelp = () => {
    setText(help, control.title);
    help.hidden = control.title === '';
    control.setAttribute('aria-describedby', help.id);
  };
  control.addEventListener('focus', showHelp);
  control.addEventListener('blur', () => {
    help.hidden = true;
    // Words that nobody sees would still keep their lines free.
    setText(help, '');
    // The line is shared by all blanks; away from the keyboard each has its own help in its title.
    control.removeAttribute('aria-describedby');
  });
  const tail = document.createTextNode('');
  return {
    ...field,
    /** @type {Field['draw']} */
    draw(now, problem, stale) {
      drawField(now, problem, stale);
      drawCommon(control, now, problem);
      // What was said while the blank was empty no longer holds once it is filled in.
      if (document.activeElement === control) showHelp();
    },
    element: h('span', { class: 'keep' }, field.element, tail),
    tail,
    shape: blank.control,
  };
}

/**
 * What all controls show alike.
 * @param {Control} control
 * @param {Blank} blank
 * @param {string} problem
 */
function drawCommon(control, blank, problem) {
  control.setAttribute('aria-label', blank.label);
  control.title = problem || helpOf(blank);
  if (blank.problem || problem) control.setAttribute('aria-invalid', 'true');
  else control.removeAttribute('aria-invalid');
  // What has no default and is not filled in yet shows only an ellipsis.
  control.classList.toggle('open', blank.value === '' && blank.shown === '…');
  control.classList.toggle('default', blank.is_default && blank.shown !== '…');
}

/**
 * The help line of a blank. Where something is typed, it says what can be.
 * @param {Blank} blank
 */
function helpOf(blank) {
  const words = blank.choices.map((choice) => choice.value).filter((value) => value !== '');
  if (blank.control === 'choice' || blank.control === 'several' || words.length === 0 || words.length > 24) return blank.help;
  return `${blank.help}${/[.!?]$/.test(blank.help) ? '' : '.'} Known here: ${words.join(', ')}.`;
}

/**
 * @param {Blank} blank
 * @param {(field: string, value: string) => void} onChange
 */
function choiceField(blank, onChange) {
  const select = h('select');
  const element = h('span', { class: 'blank choice' }, select);
  select.addEventListener('change', () => onChange(blank.field, select.value));
  let options = '';
  return {
    element,
    control: select,
    /** @param {Blank} now */
    draw(now) {
      const wanted = JSON.stringify([now.choices, now.value, now.shown]);
      if (wanted !== options) {
        options = wanted;
        select.replaceChildren(...choiceOptions(now));
        select.value = now.value;
      }
      element.dataset['shown'] = select.selectedOptions[0]?.textContent ?? now.shown;
    },
    send() {},
  };
}

/**
 * The options of a choice. Leaving the field to its default is one of them, apart from the others; a value that is no
 * choice is shown as it stands.
 * @param {Blank} blank
 */
function choiceOptions(blank) {
  const choices = blank.choices.filter((choice) => choice.value !== '');
  const offered = blank.choices.find((choice) => choice.value === '');
  const atDefault = blank.value === '';
  const rest = offered?.label ?? (atDefault ? blank.shown : 'leave it to the default');
  const list = choices.map(({ value, label }) => h('option', { value }, label));
  if (!atDefault && !choices.some((choice) => choice.value === blank.value)) {
    list.unshift(h('option', { value: blank.value }, blank.shown || blank.value));
  }
  const title = rest === '…' ? 'not chosen yet' : 'default';
  return [
    h('optgroup', { label: title }, h('option', { value: '' }, rest || 'choose')),
    h('optgroup', { label: 'choose' }, ...list),
  ];
}

/**
 * A blank to type in. Words stand in a control that can go on in a second line as the sentence does; only a long text can
 * have line breaks of its own.
 * @param {Blank} blank
 * @param {(field: string, value: string) => void} onChange
 */
function typedField(blank, onChange) {
  const long = blank.control === 'long';
  const control =
    blank.control === 'number'
      ? h('input', { type: 'text', autocomplete: 'off', spellcheck: false, inputMode: 'decimal' })
      : h('textarea', { rows: 1, spellcheck: blank.field === 'text' });
  const element = h('span', { class: `blank ${long ? 'long' : 'typed'}` }, control);
  /** @type {ReturnType<typeof setTimeout>|undefined} */
  let pause;
  let sent = blank.value;
  // A list that is known already need not be typed: while the keyboard is in the empty blank it is offered there, to be
  // confirmed by Enter or changed; left as it is, the blank stays empty.
  let known = '';
  let offered = false;

  const fit = () => {
    element.dataset['shown'] = control.value || control.placeholder;
  };
  const send = () => {
    clearTimeout(pause);
    pause = undefined;
    if (offered) return;
    if (!long) control.value = control.value.replace(/\s*\n\s*/g, ' ');
    if (control.value === sent) return;
    sent = control.value;
    onChange(blank.field, control.value);
  };
  control.addEventListener('input', () => {
    offered = false;
    fit();
    clearTimeout(pause);
    pause = setTimeout(send, PAUSE);
  });
  control.addEventListener('change', send);
  if (!long) {
    control.addEventListener('keydown', (event) => {
      if (/** @type {KeyboardEvent} */ (event).key !== 'Enter') return;
      event.preventDefault();
      offered = false;
      send();
    });
  }
  control.addEventListener('blur', () => {
    if (offered) control.value = '';
    offered = false;
    send();
  });
  // How a line is written is shown where it will be written, as soon as the keyboard is there.
  let shown = '';
  let example = '';
  const hint = () => {
    const there = document.activeElement === control;
    control.placeholder = control.value !== '' ? '' : (there && example) || shown;
    fit();
  };
  control.addEventListener('focus', () => {
    offered = control.value === '' && known !== '';
    if (offered) control.value = known;
    hint();
  });
  control.addEventListener('blur', hint);
  return {
    element,
    control,
    /**
     * @param {Blank} now
     * @param {string} _problem
     * @param {boolean} stale
     */
    draw(now, _problem, stale) {
      // While the keyboard is in the blank the person's own spelling stays, and so does the place of the caret.
      const active = document.activeElement === control;
      const typing = pause !== undefined || (active && (stale || now.value.trim() === (offered ? '' : control.value.trim())));
      if (!typing) {
        offered = false;
        sent = now.value;
        if (control.value !== now.value) control.value = now.value;
      }
      const words = now.control === 'text' ? now.choices.map((choice) => choice.value).filter((word) => word !== '') : [];
      known = words.join(words.some((word) => /[,;]/.test(word)) ? '; ' : ', ');
      shown = now.value === '' ? now.shown || '…' : '';
      example = now.example;
      hint();
    },
    send,
  };
}
