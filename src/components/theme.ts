/** Which of the two inks is shown: as the system says, or as the reader chose on this device. */
export type Theme = 'system' | 'light' | 'dark';
const key = 'gaugewright:theme';

export function chosenTheme(): Theme {
  try {
    const kept = localStorage.getItem(key);
    return kept === 'light' || kept === 'dark' ? kept : 'system';
  } catch {
    return 'system';
  }
}

/** Applies and keeps a choice. A browser that keeps nothing still shows it. */
export function chooseTheme(theme: Theme): void {
  if (theme === 'system') delete document.documentElement.dataset.theme;
  else document.documentElement.dataset.theme = theme;
  try {
    localStorage.setItem(key, theme);
  } catch {
    // Storage is closed to this page; the choice lasts as long as the page.
  }
}
