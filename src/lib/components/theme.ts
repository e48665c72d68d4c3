/** The chosen theme; 'auto' follows the system. Kept in this browser; app.html sets it before the first paint. */
export type Theme = 'auto' | 'light' | 'dim';
const KEY = 'ebbline-theme';

export function readTheme(): Theme {
  try {
    const kept = localStorage.getItem(KEY);
    return kept === 'light' || kept === 'dim' ? kept : 'auto';
  } catch {
    return 'auto'; // storage refused: the system's choice is good enough
  }
}

export function applyTheme(theme: Theme) {
  if (theme === 'auto') delete document.documentElement.dataset.theme;
  else document.documentElement.dataset.theme = theme;
  try {
    if (theme === 'auto') localStorage.removeItem(KEY);
    else localStorage.setItem(KEY, theme);
  } catch {
    // Not kept for next time; it still holds for this page.
  }
}
