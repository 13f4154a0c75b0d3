/** Files in and out: opening by choosing or dropping, and saving. */

import { download } from './copy.js';
import { decode } from './decode.js';
import { h } from './dom.js';
import { LARGEST_FILE, fileKind, megabytes, notebookName } from './tables.js';

/**
 * @typedef {object} FileActions
 * @property {(text: string, name: string) => void} onNotebook
 * @property {(cell: number|null, text: string) => void} onTable
 * @property {(words: string) => void} onProblem
 */

/** @param {FileActions} actions */
export function createFiles(actions) {
  const input = h('input', { type: 'file', accept: '.toml,.csv,.tsv,.tab,.txt,text/plain,text/csv,text/tab-separated-values', hidden: true, 'aria-hidden': 'true', tabIndex: -1, id: 'file-input' });
  document.body.append(input);
  /** @type {number|null} */
  let target = null;
  input.addEventListener('change', () => {
    const file = input.files?.[0];
    input.value = '';
    if (file) void read(file, target, actions);
  });

  addEventListener('dragover', (event) => {
    if (!event.dataTransfer?.types.includes('Files')) return;
    event.preventDefault();
    event.dataTransfer.dropEffect = 'copy';
    document.body.classList.add('dropping');
  });
  addEventListener('dragleave', (event) => {
    if (event.relatedTarget === null) document.body.classList.remove('dropping');
  });
  addEventListener('drop', (event) => {
    document.body.classList.remove('dropping');
    const file = event.dataTransfer?.files[0];
    if (!file) return;
    event.preventDefault();
    void read(file, cellUnder(event.target), actions);
  });

  return {
    /** @param {number|null} cell the data cell that takes a table; null for a new one */
    choose(cell) {
      target = cell;
      input.click();
    },
  };
}

/**
 * The data cell that something is dropped on.
 * @param {EventTarget|null} target
 */
function cellUnder(target) {
  const cell = target instanceof Element ? target.closest('.cell[data-kind="data"]') : null;
  const id = Number(cell?.id.replace('cell-', ''));
  return cell && Number.isInteger(id) ? id : null;
}

/**
 * @param {File} file
 * @param {number|null} cell
 * @param {FileActions} actions
 */
async function read(file, cell, actions) {
  const kind = fileKind(file.name);
  if (kind === 'workbook') {
    actions.onProblem(`“${file.name}” is a workbook. Open it in its own program, select the table with its header row, copy it, and paste it here.`);
    return;
  }
  if (file.size > LARGEST_FILE) {
    actions.onProblem(`“${file.name}” is a file of ${megabytes(file.size)}; this page reads files of up to ${megabytes(LARGEST_FILE)}. Save it with only the columns that are needed.`);
    return;
  }
  try {
    const { text } = decode(new Uint8Array(await file.arrayBuffer()));
    if (kind === 'notebook') actions.onNotebook(text.replace(/\r\n?/g, '\n'), notebookName(file.name));
    else if (text.includes('\0')) actions.onProblem(`“${file.name}” is not a text file. Save it as delimited text (.csv or .tsv) and open that.`);
    else actions.onTable(cell, text);
  } catch (error) {
    actions.onProblem(`“${file.name}” could not be read: ${error instanceof Error ? error.message : String(error)}. Check that it is still there and that you may read it.`);
  }
}

/**
 * @param {string} name
 * @param {string} text
 */
export function saveNotebook(name, text) {
  download(`${name}.levelwise.toml`, new Blob([text], { type: 'application/toml' }));
}

/**
 * @param {string} name
 * @param {string} html
 */
export function saveReport(name, html) {
  download(`${name}.html`, new Blob([html], { type: 'text/html' }));
}
