import { useEffect } from 'react';

/** Names the window after the page: "Alerts, Fishplate". */
export function useTitle(title: string): void {
  useEffect(() => {
    document.title = `${title}, Fishplate`;
  }, [title]);
}
