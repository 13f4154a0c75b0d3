/** A cell's answer: the engine's headline and markup, with the page's buttons for taking parts of it away. */

import { copy, copyTable, savePng, saveSvg } from './copy.js';
import { h, setText } from './dom.js';
import { showMarkup } from './policy.js';

/** @typedef {import('./messages.js').CellView} CellView */

/**
 * @param {(words: string) => void} say tells the person that something has been done
 */
export function createAnswer(say) {
  const headline = h('p', { class: 'headline' });
  const body = h('div', { class: 'answer-body' });
  const element = h('div', { class: 'answer' }, headline, body);
  let shown = '';
  let writeup = '';

  return {
    element,
    /**
     * @param {CellView} cell
     * @param {string} fileStem the name that saved figures begin with
     */
    draw(cell, fileStem) {
      setText(headline, cell.headline);
      // While long work is going on, how far it is stands in the place of the headline of the answer before.
      element.classList.toggle('going-on', cell.progress !== '');
      headline.hidden = cell.progress === '' && (cell.headline === '' || cell.answer === '' || cell.answer.includes('class="a-headline"'));
      element.dataset['condition'] = cell.condition === 'needs you' ? 'needs' : cell.condition;
      element.setAttribute('aria-busy', String(cell.condition === 'working'));
      if (cell.answer === shown && cell.writeup === writeup) return;
      shown = cell.answer;
      writeup = cell.writeup;
      showMarkup(body, cell.answer);
      decorate(body, cell, fileStem, say);
    },
  };
}

/**
 * Sets the buttons beside what they act on.
 * @param {HTMLElement} body
 * @param {CellView} cell
 * @param {string} fileStem
 * @param {(words: string) => void} say
 */
function decorate(body, cell, fileStem, say) {
  body.querySelectorAll('table').forEach((table) => {
    const name = table.caption?.textContent?.trim() || 'table';
    (table.closest('.a-table') ?? table).after(takeaway(button('Copy table', `Copy table: ${name}`, async () => report(say, 'Table', await copyTable(table)))));
  });
  [...body.querySelectorAll('svg')].filter((svg) => !svg.parentElement?.closest('svg')).forEach((svg, i) => {
    const name = `${fileStem}-${cell.name ?? cell.kind ?? 'cell'}${i > 0 ? `-${i + 1}` : ''}`.replaceAll(/[^\p{L}\p{N}_-]+/gu, '-');
    const figure = svg.closest('figure') ?? svg;
    figure.after(
      takeaway(
        button('Save SVG', 'Save SVG, the figure as a drawing', () => saveSvg(svg, name)),
        button('Save PNG', 'Save PNG, the figure as a picture', () => void savePng(svg, name)),
      ),
    );
  });
  // One landmark for each cell is enough to find one's way by; its parts are groups.
  for (const part of body.querySelectorAll('section, [role="region"]')) part.setAttribute('role', 'group');
  if (cell.writeup) {
    const place = body.querySelector('.a-writeup');
    const bar = takeaway(button('Copy write-up', 'Copy write-up to the clipboard', async () => report(say, 'Write-up', await copy(cell.writeup))));
    if (place) place.after(bar);
    else body.append(h('p', { class: 'writeup' }, cell.writeup), bar);
  }
}

/** @param {...Node} buttons */
function takeaway(...buttons) {
  return h('p', { class: 'takeaway' }, ...buttons);
}

/**
 * @param {string} words
 * @param {string} label
 * @param {() => void} onClick
 */
function button(words, label, onClick) {
  return h('button', { type: 'button', class: 'quiet', 'aria-label': label, onclick: onClick }, words);
}

/**
 * @param {(words: string) => void} say
 * @param {string} what
 * @param {boolean} done
 */
function report(say, what, done) {
  say(done ? `${what} copied.` : `The browser did not let this page copy. Select the ${what.toLowerCase()} and copy it with the keyboard.`);
}
