/**
 * The messages between the page and the worker, as types only. They mirror `src/web/messages.rs`.
 *
 * Cell ids are small integers, stable while a notebook is open. Every text position is counted in UTF-16
 * code units inside the cell's own text.
 */

/** @typedef {'note'|'data'|'summary'|'study'|'profile'|'overall'|'comparisons'|'trend'|'power'} Kind */
/** @typedef {'settled'|'working'|'waiting'|'needs you'} Condition */

/** @typedef {{ value: string, label: string }} Choice */

/** @typedef {{ type: 'words', text: string }} Words */

/**
 * One blank of a sentence.
 * @typedef {object} Blank
 * @property {'blank'} type
 * @property {string} field the name of the field in the cell's text
 * @property {string} label the accessible name
 * @property {string} value the text now in force; "" where the default is
 * @property {string} shown what the sentence shows
 * @property {'choice'|'several'|'text'|'number'|'long'} control
 * @property {Choice[]} choices the values to choose from; for the other controls, suggestions
 * @property {string} help
 * @property {string} example what a line looks like, for a blank of several lines
 * @property {boolean} is_default
 * @property {boolean} problem
 */

/** @typedef {Words|Blank} Part */

/**
 * @typedef {object} Diagnostic
 * @property {string} message
 * @property {number} start
 * @property {number} end
 * @property {number} line
 * @property {number} column
 * @property {string|null} [field]
 */

/**
 * One cell as the worker tells it.
 * @typedef {object} CellMessage
 * @property {number} id
 * @property {Kind|null} kind null while its text does not say one
 * @property {string|null} [name]
 * @property {string} [text] left out when it is long and has not changed
 * @property {Condition} condition
 * @property {Part[]} sentence
 * @property {Diagnostic[]} diagnostics
 * @property {string} headline the cell in one line; `progress` while there is such
 * @property {string|null} [progress] how far long work for the cell is, in a sentence
 * @property {string} answer HTML from the engine
 * @property {string|null} [writeup]
 * @property {number|null} [table_rows] the number of rows of a data cell
 * @property {number} revision
 */

/** @typedef {Readonly<CellMessage & { text: string, name: string|null, progress: string, writeup: string, table_rows: number|null }>} CellView */

/**
 * A kind as the engine describes it.
 * @typedef {{ name: Kind, purpose: string, fields: string[] }} KindInfo
 */

/** @typedef {{ type: 'ready', version: string, kinds: KindInfo[] }} Ready */

/**
 * @typedef {object} Update
 * @property {'update'} type
 * @property {number} seq the request that it follows
 * @property {number[]} order
 * @property {CellMessage[]} cells those that changed
 * @property {number[]} recomputed cells whose answers were computed, not found kept
 * @property {boolean} settled nothing is left to compute
 * @property {boolean} can_undo
 * @property {boolean} can_redo
 * @property {string|null} [notice] a remark on the file as a whole
 */

/**
 * A window of a data cell's table.
 * @typedef {object} Rows
 * @property {'rows'} type
 * @property {number} cell
 * @property {number} from
 * @property {{ name: string, type: 'number'|'label' }[]} columns
 * @property {number} total
 * @property {string[][]} rows
 * @property {number[]} excluded indices of rows, counted from the start of the table
 */

/** @typedef {{ type: 'saved', text: string }} Saved */
/** @typedef {{ type: 'report', html: string }} Report */
/** @typedef {{ type: 'refused', seq: number, message: string }} Refused */
/** @typedef {{ type: 'failed', message: string }} Failed the worker's own last words, not the engine's */

/** @typedef {Ready|Update|Rows|Saved|Report|Refused|Failed} Message */

/**
 * A request without its number; the engine's owner adds `seq`.
 * @typedef {{ type: 'open', text: string }
 *   | { type: 'edit_text', cell: number, text: string }
 *   | { type: 'set_field', cell: number, field: string, value: string }
 *   | { type: 'add', kind: Kind, after: number|null }
 *   | { type: 'duplicate', cell: number }
 *   | { type: 'remove', cell: number }
 *   | { type: 'move', cell: number, to: number }
 *   | { type: 'rename', cell: number, name: string }
 *   | { type: 'undo' }
 *   | { type: 'redo' }
 *   | { type: 'set_value', cell: number, row: number, column: number, value: string }
 *   | { type: 'set_table', cell: number|null, text: string }
 *   | { type: 'rows', cell: number, from: number, count: number }
 *   | { type: 'save' }
 *   | { type: 'report', date: string }} Request
 */

/** @typedef {Request & { seq: number }} NumberedRequest */

export {};
