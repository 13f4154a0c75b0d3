/** A blank that takes any number of its choices: what is chosen stands in the sentence, and a list to tick opens below it. */

import { freshId, h, setText } from './dom.js';

/** @typedef {import('./messages.js').Blank} Blank */

/**
 * @param {Blank} blank
 * @param {(field: string, value: string) => void} onChange
 */
export function severalField(blank, onChange) {
  const list = h('span', { class: 'ticks', id: freshId('ticks'), role: 'group', 'aria-label': blank.label, hidden: true });
  const button = h('button', { type: 'button', 'aria-expanded': 'false', 'aria-controls': list.id });
  const element = h('span', { class: 'blank several' }, button, list);
  /** @type {{ value: string, box: HTMLInputElement }[]} */
  let boxes = [];
  let drawn = '';

  /** @param {boolean} open */
  function setOpen(open) {
    list.hidden = !open;
    button.setAttribute('aria-expanded', String(open));
    if (!open) return;
    list.style.marginLeft = '0';
    const over = list.getBoundingClientRect().right - document.documentElement.clientWidth + 12;
    if (over > 0) list.style.marginLeft = `${-over}px`;
  }
  button.addEventListener('click', () => setOpen(Boolean(list.hidden)));
  element.addEventListener('focusout', (event) => {
    if (!(event.relatedTarget instanceof Node && element.contains(event.relatedTarget))) setOpen(false);
  });
  // A click on the words of a box would else take the keyboard away for a moment, and close the list.
  list.addEventListener('mousedown', (event) => event.preventDefault());
  element.addEventListener('keydown', (event) => {
    if (event.key !== 'Escape' || list.hidden) return;
    event.preventDefault();
    setOpen(false);
    button.focus();
  });
  const send = () => onChange(blank.field, boxes.filter(({ box }) => box.checked).map(({ value }) => value).join(', '));

  return {
    element,
    control: button,
    /** @param {Blank} now */
    draw(now) {
      setText(button, now.shown);
      const chosen = parts(now.value || now.shown);
      const isKnown = (/** @type {string} */ word) => now.choices.some(({ value }) => value.toLowerCase() === word);
      // What was written and is no choice can be ticked off here too.
      const strange = now.value === '' ? [] : chosen.filter((word) => !isKnown(word)).map((value) => ({ value, label: value }));
      const offers = [...now.choices, ...strange];
      const wanted = JSON.stringify(offers);
      if (wanted !== drawn) {
        drawn = wanted;
        boxes = offers.map(({ value }) => ({ value, box: h('input', { type: 'checkbox', onchange: send }) }));
        list.replaceChildren(...boxes.map(({ box }, i) => h('label', {}, box, ` ${offers[i]?.label ?? ''}`)));
      }
      for (const { value, box } of boxes) box.checked = chosen.includes(value.toLowerCase());
    },
    send() {},
  };
}

/** @param {string} list */
function parts(list) {
  return list.split(/[,;]/).map((word) => word.trim().toLowerCase()).filter((word) => word !== '');
}
