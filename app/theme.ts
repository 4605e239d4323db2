/** Light or dark: what the system prefers, until the reader chooses; `data-theme` on <html> says which. */

const KEY = 'kilostack.theme';

type Theme = 'light' | 'dark';

const dark = () => matchMedia('(prefers-color-scheme: dark)');

function chosen(): Theme | null {
  try {
    const kept = localStorage.getItem(KEY);
    return kept === 'light' || kept === 'dark' ? kept : null;
  } catch {
    // Storage may be barred; the page then follows the system.
    return null;
  }
}

function apply(): void {
  document.documentElement.dataset.theme = chosen() ?? (dark().matches ? 'dark' : 'light');
}

/** Show the theme in force, and follow the system while nothing has been chosen. */
export function openTheme(): void {
  apply();
  dark().addEventListener('change', apply);
}

/** Change to the other theme and remember it; choosing what the system prefers forgets the choice. */
export function toggleTheme(): void {
  const next: Theme = document.documentElement.dataset.theme === 'dark' ? 'light' : 'dark';
  document.documentElement.dataset.theme = next;
  try {
    if ((next === 'dark') === dark().matches) localStorage.removeItem(KEY);
    else localStorage.setItem(KEY, next);
  } catch {
    // Barred storage: the choice holds until the page is closed.
  }
}
