/** Light, dark, or as the system says. The choice lives as long as the page; nothing is stored. */

/** @typedef {'system'|'light'|'dark'} Theme */

/** @type {readonly Theme[]} */
const THEMES = ['system', 'light', 'dark'];

/**
 * The theme after this one.
 * @param {Theme} theme
 * @returns {Theme}
 */
export function nextTheme(theme) {
  return THEMES[(THEMES.indexOf(theme) + 1) % THEMES.length] ?? 'system';
}

/** @param {Theme} theme */
export function showTheme(theme) {
  if (theme === 'system') delete document.documentElement.dataset['theme'];
  else document.documentElement.dataset['theme'] = theme;
}
