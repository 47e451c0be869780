import { useLayoutEffect, useState, type RefObject } from 'react';

export interface MeasuredWidth {
  readonly widthPx: number;
  /** The text size that the reader set in the browser. */
  readonly remPx: number;
}

/** The width of an element, kept up to date; 0 before it is known. */
export function useElementWidth(element: RefObject<HTMLElement | null>): MeasuredWidth {
  const [measured, setMeasured] = useState<MeasuredWidth>({ widthPx: 0, remPx: 16 });
  useLayoutEffect(() => {
    const target = element.current;
    if (target === null) return undefined;
    const measure = () => {
      const next = { widthPx: target.clientWidth, remPx: parseFloat(getComputedStyle(document.documentElement).fontSize) || 16 };
      setMeasured((last) => (last.widthPx === next.widthPx && last.remPx === next.remPx ? last : next));
    };
    measure();
    const observer = new ResizeObserver(measure);
    observer.observe(target);
    return () => observer.disconnect();
  }, [element]);
  return measured;
}
