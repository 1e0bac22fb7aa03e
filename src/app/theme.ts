import { useEffect, useState } from 'react';

export type Theme = 'system' | 'light' | 'dark';
const key = 'weirmark-theme';

const isTheme = (value: string | null): value is Theme =>
  value === 'system' || value === 'light' || value === 'dark';

/** The chosen theme, kept in this browser; `system` follows the machine. */
export function useTheme(): [Theme, (theme: Theme) => void] {
  const [theme, setTheme] = useState<Theme>(() => {
    const kept = localStorage.getItem(key);
    return isTheme(kept) ? kept : 'system';
  });
  useEffect(() => {
    if (theme === 'system') delete document.documentElement.dataset.theme;
    else document.documentElement.dataset.theme = theme;
    localStorage.setItem(key, theme);
  }, [theme]);
  return [theme, setTheme];
}
