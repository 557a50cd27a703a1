import { useSyncExternalStore } from 'react';

/** What a person sets for this device alone. */
export interface Preferences {
  theme: 'system' | 'light' | 'dark';
  density: 'normal' | 'dense';
  distance: 'miles' | 'kilometres';
  singleKeys: 'on' | 'off';
  /** Share of the width that the map takes beside the table, in per cent. */
  mapShare: number;
}

const storageKey = 'fishplate.device';
const standard: Preferences = {
  theme: 'system',
  density: 'normal',
  distance: 'miles',
  singleKeys: 'on',
  mapShare: 52,
};

function load(): Preferences {
  try {
    return { ...standard, ...(JSON.parse(localStorage.getItem(storageKey) ?? '{}') as object) };
  } catch {
    return standard;
  }
}

let current = load();
const listeners = new Set<() => void>();

function subscribe(listener: () => void): () => void {
  listeners.add(listener);
  return () => listeners.delete(listener);
}

/** Puts theme and density on the document; called once before the first drawing. */
export function applyPreferences(): void {
  const { dataset } = document.documentElement;
  if (current.theme === 'system') delete dataset.theme;
  else dataset.theme = current.theme;
  dataset.density = current.density;
}

/** Changes and keeps some settings; without storage they last as long as the page. */
export function setPreferences(change: Partial<Preferences>): void {
  current = { ...current, ...change };
  try {
    localStorage.setItem(storageKey, JSON.stringify(current));
  } catch {
    // A browser that refuses storage still gets the setting for this page.
  }
  applyPreferences();
  listeners.forEach((listener) => listener());
}

/** The settings of this device; draws again when one changes. */
export const usePreferences = (): Preferences => useSyncExternalStore(subscribe, () => current);
