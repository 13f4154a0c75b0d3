/** Small questions about pasted text and file names, answered without the document. */

/** Files larger than this are refused: the browser would need several times as much memory. */
export const LARGEST_FILE = 120_000_000;

/**
 * Whether pasted text is a table rather than a single value: it has a second line, or a tab.
 * @param {string} text
 */
export function looksLikeTable(text) {
  const trimmed = text.trimEnd();
  return trimmed.includes('\n') || trimmed.includes('\t');
}

/**
 * What kind of file a name stands for.
 * @param {string} name
 * @returns {'notebook'|'table'|'workbook'|'unknown'}
 */
export function fileKind(name) {
  const lower = name.toLowerCase();
  if (lower.endsWith('.toml')) return 'notebook';
  if (/\.(csv|tsv|tab|txt)$/.test(lower)) return 'table';
  if (/\.(xlsx|xlsm|xls|ods|numbers)$/.test(lower)) return 'workbook';
  return 'unknown';
}

/**
 * A notebook's name from its file's name.
 * @param {string} file
 */
export function notebookName(file) {
  return file.replace(/\.toml$/i, '').replace(/\.levelwise$/i, '') || 'notebook';
}

/**
 * A name that can be a file's on every system.
 * @param {string} typed
 */
export function fileStem(typed) {
  return typed.replace(/[\\/:*?"<>|\u0000-\u001f]+/g, ' ').replace(/\s+/g, ' ').trim().replace(/^\.+/, '') || 'notebook';
}

/**
 * A count of bytes in words.
 * @param {number} bytes
 */
export function megabytes(bytes) {
  return `${Math.max(1, Math.round(bytes / 1e6)).toLocaleString('en')} MB`;
}

/**
 * Rows of cells as tab-separated text, for the clipboard.
 * @param {readonly (readonly string[])[]} rows
 */
export function tabSeparated(rows) {
  return rows.map((row) => row.map((cell) => cell.replace(/\s+/g, ' ').trim()).join('\t')).join('\n');
}
