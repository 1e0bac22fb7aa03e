import { useEffect, useRef, useState, type RefObject } from 'react';

/** The width of an element, as it changes; 0 until it is known. */
export function useWidth<E extends HTMLElement>(): [RefObject<E | null>, number] {
  const element = useRef<E>(null);
  const [width, setWidth] = useState(0);
  useEffect(() => {
    const watched = element.current;
    if (!watched) return;
    const observer = new ResizeObserver(([entry]) => {
      if (entry) setWidth(Math.floor(entry.contentRect.width));
    });
    observer.observe(watched);
    return () => observer.disconnect();
  }, []);
  return [element, width];
}
