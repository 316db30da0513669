import { type RefObject, useEffect, useState } from 'react';
import { marginPx, rootPx, xOf } from './threadLayout.ts';

/** What is in view of a thread longer than the window, in the thread's own pixels. */
export interface ThreadView {
  leftPx: number;
  widthPx: number;
}

/** How many pixels of the screen one of the thread is: it grows with the type. */
function scaleNow(): number {
  return Number.parseFloat(getComputedStyle(document.documentElement).fontSize) / rootPx;
}

/** Keeps what is in view; the wheel scrolls along the thread. */
export function useThreadView(hold: RefObject<HTMLElement | null>): ThreadView {
  const [view, setView] = useState<ThreadView>({ leftPx: 0, widthPx: 800 });
  useEffect(() => {
    const element = hold.current;
    if (!element) return;
    let isAwaited = false;
    const measure = () => {
      isAwaited = false;
      const scale = scaleNow();
      setView({ leftPx: element.scrollLeft / scale, widthPx: element.clientWidth / scale });
    };
    const soon = () => {
      if (isAwaited) return;
      isAwaited = true;
      requestAnimationFrame(measure);
    };
    const onWheel = (event: WheelEvent) => {
      if (event.deltaX !== 0 || element.scrollWidth <= element.clientWidth) return;
      element.scrollLeft += event.deltaY;
      event.preventDefault();
    };
    const observer = new ResizeObserver(soon);
    observer.observe(element);
    element.addEventListener('scroll', soon, { passive: true });
    element.addEventListener('wheel', onWheel, { passive: false });
    measure();
    return () => {
      observer.disconnect();
      element.removeEventListener('scroll', soon);
      element.removeEventListener('wheel', onWheel);
    };
  }, [hold]);
  return view;
}

/** Brings a state into view with a neighbour on either side. */
export function bringIntoView(hold: HTMLElement | null, index: number): void {
  if (!hold || index < 0) return;
  const scale = scaleNow();
  const leftPx = (index === 0 ? 0 : xOf(index - 1) - marginPx) * scale;
  const rightPx = (xOf(index + 1) + marginPx) * scale;
  if (leftPx < hold.scrollLeft) hold.scrollLeft = leftPx;
  else if (rightPx > hold.scrollLeft + hold.clientWidth) hold.scrollLeft = rightPx - hold.clientWidth;
}
