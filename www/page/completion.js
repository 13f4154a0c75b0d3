/**
 * What could be typed at a place in a cell's text: the names of fields at the start of a line, and after the equals sign the
 * values that the engine's sentence offers for that field.
 */

/** @typedef {import('./messages.js').CellView} CellView */
/** @typedef {import('./messages.js').Blank} Blank */
/** @typedef {{ label: string, apply: string, detail?: string, info?: string }} Option */
/** @typedef {{ from: number, options: Option[] }} Completions */
/** @typedef {Pick<CellView, 'sentence'> & { fields: readonly string[], kinds: readonly string[] }} Known `fields`: every field of the kind, also those outside the sentence */

/**
 * The options at `position` (UTF-16 units) of `text`, or null where nothing sensible can be offered.
 * @param {string} text
 * @param {number} position
 * @param {Known} cell
 * @returns {Completions|null}
 */
export function completionsAt(text, position, cell) {
  const lineStart = text.lastIndexOf('\n', position - 1) + 1;
  const before = text.slice(lineStart, position);
  if (insideLongText(text.slice(0, lineStart))) return null;
  const field = /^\s*([A-Za-z_-]*)$/.exec(before);
  if (field) return fieldNames(text, position - (field[1] ?? '').length, cell);
  const value = /^\s*([A-Za-z_-]+)\s*=\s*(.*)$/.exec(before) ?? openList(text.slice(0, lineStart), before);
  return value ? fieldValues(value[1] ?? '', value[2] ?? '', position, cell) : null;
}

/**
 * Whether a text in triple quotes is still open after `before`.
 * @param {string} before
 */
function insideLongText(before) {
  return (before.match(/"""/g) ?? []).length % 2 === 1 || (before.match(/'''/g) ?? []).length % 2 === 1;
}

/**
 * The field whose list, begun on an earlier line, the present line goes on with.
 * @param {string} above
 * @param {string} before
 * @returns {string[]|null}
 */
function openList(above, before) {
  const opened = /(?:^|\n)\s*([A-Za-z_-]+)\s*=\s*\[[^\]]*$/.exec(above);
  return opened ? [before, opened[1] ?? '', before] : null;
}

/**
 * @param {string} text
 * @param {number} from
 * @param {Known} cell
 * @returns {Completions|null}
 */
function fieldNames(text, from, cell) {
  const inSentence = new Map(blanks(cell).map((blank) => [blank.field, blank]));
  const options = [...new Set([...inSentence.keys(), ...cell.fields])]
    .filter((field) => !new RegExp(`^\\s*${escaped(field)}\\s*=`, 'm').test(text))
    .map((field) => ({ label: field, apply: `${field} = `, detail: inSentence.get(field)?.label, info: inSentence.get(field)?.help }));
  return options.length > 0 ? { from, options } : null;
}

/**
 * @param {string} field
 * @param {string} typed what stands after the equals sign, up to the place
 * @param {number} position
 * @param {Known} cell
 * @returns {Completions|null}
 */
function fieldValues(field, typed, position, cell) {
  const choices = field === 'kind' ? cell.kinds.map((kind) => ({ value: kind, label: kind })) : blanks(cell).find((blank) => blank.field === field)?.choices ?? [];
  if (choices.length === 0) return null;
  const bare = blanks(cell).some((blank) => blank.field === field && blank.control === 'number');
  const opened = openQuote(typed);
  const word = opened === null ? /[^\s,[\]{}]*$/.exec(typed)?.[0] ?? '' : `"${opened}`;
  // A value begins right after the equals sign, or in a list after its bracket or a comma.
  if (!/(^|[[,])\s*$/.test(typed.slice(0, typed.length - word.length))) return null;
  const from = position - word.length;
  const options = choices
    .filter((choice) => choice.value !== '')
    .map(({ value, label }) => {
      const written = bare ? value : quoted(value);
      return { label: written, apply: written, ...(label === value ? {} : { detail: label }) };
    });
  return { from, options };
}

/**
 * The text after a quote that is still open, or null.
 * @param {string} typed
 */
function openQuote(typed) {
  const parts = typed.split('"');
  return parts.length % 2 === 0 ? parts.at(-1) ?? '' : null;
}

/**
 * A choice as TOML: truth values as they are, everything else in quotes (a level may well be called 30).
 * @param {string} value
 */
function quoted(value) {
  if (value === 'true' || value === 'false') return value;
  return `"${value.replace(/[\\"]/g, '\\$&')}"`;
}

/** @param {string} text */
function escaped(text) {
  return text.replace(/[.*+?^${}()|[\]\\]/g, '\\$&');
}

/**
 * @param {Known} cell
 * @returns {Blank[]}
 */
function blanks(cell) {
  return cell.sentence.flatMap((part) => (part.type === 'blank' ? part : []));
}
