import { type RefCallback, useCallback, useRef, useState } from "react";

/** Size of an element, px, followed as it changes; the element may come and go. */
export function useSize<T extends HTMLElement>(): {
  readonly ref: RefCallback<T>;
  readonly width: number;
  readonly height: number;
} {
  const observer = useRef<ResizeObserver | null>(null);
  const [size, setSize] = useState({ width: 0, height: 0 });
  const ref = useCallback((element: T | null) => {
    observer.current?.disconnect();
    observer.current = null;
    if (element === null) return;
    const measure = (): void => {
      const { width, height } = element.getBoundingClientRect();
      setSize((old) =>
        old.width === Math.floor(width) && old.height === Math.floor(height)
          ? old
          : { width: Math.floor(width), height: Math.floor(height) },
      );
    };
    measure();
    observer.current = new ResizeObserver(measure);
    observer.current.observe(element);
  }, []);
  return { ref, ...size };
}
