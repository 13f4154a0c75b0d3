/**
 * What the page knows, as one value that is replaced and never patched. Functions here take a state and a happening and
 * return the next state; none of them touches the document or the worker.
 */

/** @typedef {import('./messages.js').CellView} CellView */
/** @typedef {import('./messages.js').CellMessage} CellMessage */
/** @typedef {import('./messages.js').Update} Update */
/** @typedef {import('./messages.js').Rows} Rows */

/** @typedef {{ text: string, tone: 'plain'|'problem' }} Notice */

/**
 * Where the keyboard should go at the next drawing. `stamp` makes two equal wishes different.
 * @typedef {{ cell: number, part: 'head'|'sentence'|'text', at?: number, stamp: number }} FocusWish
 */

/**
 * @typedef {object} State
 * @property {readonly number[]} order
 * @property {ReadonlyMap<number, CellView>} cells
 * @property {boolean} settled
 * @property {boolean} canUndo
 * @property {boolean} canRedo
 * @property {string} fileName without its ending
 * @property {boolean} unsaved
 * @property {ReadonlySet<number>} texts cells whose text face is open
 * @property {number} heard the newest request that an update has followed
 * @property {ReadonlyMap<number, number>} typed by cell, the request that carried its newest change by the person
 * @property {ReadonlyMap<number, Rows & { revision: number }>} windows the rows at hand, by data cell
 * @property {{ after: number|null }|null} adding the place where the list of kinds is open
 * @property {{ seq: number, known: readonly number[] }|null} expecting a request after which a new cell gets the keyboard
 * @property {FocusWish|null} focus
 * @property {Notice|null} notice
 * @property {string|null} remark what the engine has to say of the file as a whole
 * @property {readonly import('./messages.js').KindInfo[]} kinds
 * @property {'starting'|'ready'|'stopped'} engine
 */

/** @type {State} */
export const EMPTY = Object.freeze({
  order: [],
  cells: new Map(),
  settled: true,
  canUndo: false,
  canRedo: false,
  fileName: 'notebook',
  unsaved: false,
  texts: new Set(),
  heard: 0,
  typed: new Map(),
  windows: new Map(),
  adding: null,
  expecting: null,
  focus: null,
  notice: null,
  remark: null,
  kinds: [],
  engine: 'starting',
});

/**
 * The state after the engine told what has changed.
 *
 * Text that the person has typed since the request that the update follows stays as typed; a later update brings the
 * engine's reading of it.
 * @param {State} state
 * @param {Update} update
 * @returns {State}
 */
export function afterUpdate(state, update) {
  const cells = new Map(state.cells);
  for (const message of update.cells) cells.set(message.id, merged(state, message, update.seq));
  const present = new Set(update.order);
  for (const id of cells.keys()) if (!present.has(id)) cells.delete(id);
  const next = {
    ...state,
    order: update.order,
    cells,
    settled: update.settled,
    heard: Math.max(state.heard, update.seq),
    canUndo: update.can_undo,
    canRedo: update.can_redo,
    texts: kept(state.texts, present),
    ...withRemark(state, update.notice ?? null),
  };
  return withNewCellInFocus(next, update);
}

/**
 * @param {State} state
 * @param {CellMessage} message
 * @param {number} seq
 * @returns {CellView}
 */
function merged(state, message, seq) {
  const before = state.cells.get(message.id);
  const typedSince = (state.typed.get(message.id) ?? -1) > seq;
  const text = (typedSince ? before?.text : message.text ?? before?.text) ?? '';
  return {
    ...message,
    text,
    name: message.name ?? null,
    progress: message.progress ?? '',
    writeup: message.writeup ?? '',
    table_rows: message.table_rows ?? null,
    diagnostics: message.diagnostics ?? [],
  };
}

/**
 * @param {ReadonlySet<number>} ids
 * @param {ReadonlySet<number>} present
 * @returns {ReadonlySet<number>}
 */
function kept(ids, present) {
  return [...ids].every((id) => present.has(id)) ? ids : new Set([...ids].filter((id) => present.has(id)));
}

/**
 * A remark on the file is shown once; it can be dismissed and then does not come back with every update.
 * @param {State} state
 * @param {string|null} remark
 * @returns {Pick<State, 'remark'|'notice'>}
 */
function withRemark(state, remark) {
  const notice = remark !== null && remark !== state.remark ? { text: remark, tone: /** @type {const} */ ('plain') } : state.notice;
  return { remark, notice };
}

/**
 * @param {State} state
 * @param {Update} update
 * @returns {State}
 */
function withNewCellInFocus(state, update) {
  const expecting = state.expecting;
  if (!expecting || update.seq < expecting.seq) return state;
  const added = update.order.filter((id) => !expecting.known.includes(id));
  const last = added.at(-1);
  if (last === undefined) return { ...state, expecting: null };
  return { ...state, expecting: null, focus: { cell: last, part: 'sentence', stamp: update.seq } };
}

/**
 * The state after a person typed in a text face: the text is theirs from the first keystroke.
 * @param {State} state
 * @param {number} cell
 * @param {string} text
 * @param {number} seq
 * @returns {State}
 */
export function afterTyping(state, cell, text, seq) {
  const view = state.cells.get(cell);
  if (!view) return state;
  return {
    ...state,
    cells: new Map(state.cells).set(cell, { ...view, text }),
    typed: new Map(state.typed).set(cell, seq),
    unsaved: true,
  };
}

/**
 * The state after a person changed something in a cell other than its text.
 * @param {State} state
 * @param {number} cell
 * @param {number} seq
 * @returns {State}
 */
export function afterChange(state, cell, seq) {
  return { ...state, typed: new Map(state.typed).set(cell, seq), unsaved: true };
}

/**
 * Whether the engine has yet to answer the newest change of a cell.
 * @param {State} state
 * @param {number} cell
 */
export function isStale(state, cell) {
  return (state.typed.get(cell) ?? 0) > state.heard;
}

/**
 * The state with a window of rows at hand.
 * @param {State} state
 * @param {Rows} rows
 * @returns {State}
 */
export function withRows(state, rows) {
  const revision = state.cells.get(rows.cell)?.revision ?? 0;
  return { ...state, windows: new Map(state.windows).set(rows.cell, { ...rows, revision }) };
}

/**
 * The set with `id` in it if it was not, and without it if it was.
 * @param {ReadonlySet<number>} set
 * @param {number} id
 * @returns {ReadonlySet<number>}
 */
export function toggled(set, id) {
  const next = new Set(set);
  if (!next.delete(id)) next.add(id);
  return next;
}

/**
 * The state when the engine has failed. The cells stay: they are what the next engine is given.
 * @param {State} state
 * @returns {State}
 */
export function afterFailure(state) {
  return { ...state, engine: 'stopped', windows: new Map(), expecting: null };
}

/**
 * The state once a fresh engine holds the same cells under new ids: faces stay open where they were.
 * @param {State} state
 * @param {readonly number[]} order the new ids, in the same order as the old
 * @returns {State}
 */
export function afterRecovery(state, order) {
  /** @param {ReadonlySet<number>} ids */
  const moved = (ids) => new Set(order.filter((_, i) => ids.has(state.order[i] ?? -1)));
  return { ...state, engine: 'ready', order, cells: new Map(), texts: moved(state.texts), typed: new Map() };
}

/**
 * The cells from first to last.
 * @param {State} state
 * @returns {CellView[]}
 */
export function cellsInOrder(state) {
  return state.order.flatMap((id) => state.cells.get(id) ?? []);
}
