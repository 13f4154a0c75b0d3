/** The kinds of cells in words: what each is called and what it is for. */

/** @typedef {import('./messages.js').Kind} Kind */

/** @type {readonly { kind: Kind, title: string, purpose: string }[]} */
export const KINDS = [
  { kind: 'data', title: 'Data', purpose: 'a table, one row for each observation' },
  { kind: 'summary', title: 'Summary', purpose: 'groups of which only n, mean and SD are known' },
  { kind: 'study', title: 'Study', purpose: 'what is measured, on which groups, and which one is the control' },
  { kind: 'profile', title: 'Profile', purpose: 'each group described, and the assumptions looked at' },
  { kind: 'overall', title: 'Overall', purpose: 'whether the groups differ at all' },
  { kind: 'comparisons', title: 'Comparisons', purpose: 'which groups differ, and by how much' },
  { kind: 'trend', title: 'Trend', purpose: 'how the outcome goes with the level' },
  { kind: 'power', title: 'Power', purpose: 'how many observations the next study needs' },
  { kind: 'note', title: 'Note', purpose: 'your own words between the cells' },
];

/**
 * The heading word of a kind.
 * @param {Kind} kind
 */
export function kindTitle(kind) {
  return KINDS.find((entry) => entry.kind === kind)?.title ?? kind;
}

/**
 * A cell in a few words, for button names and messages.
 * @param {{ kind: Kind, name: string|null }} cell
 */
export function cellTitle(cell) {
  return cell.name ? `${kindTitle(cell.kind)} “${cell.name}”` : kindTitle(cell.kind);
}
