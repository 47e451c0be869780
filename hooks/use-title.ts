import { useEffect } from 'react';

/** The page's title: the screen, the system if any, and the product. */
export function useTitle(...parts: (string | undefined)[]): void {
  const title = [...parts.filter((part) => part !== undefined && part !== ''), 'Steadfall'].join(' \u00b7 ');
  useEffect(() => {
    document.title = title;
  }, [title]);
}
