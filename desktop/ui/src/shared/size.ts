import type { Attachment } from 'svelte/attachments';

/** Tells the size of an element in whole px, at once and whenever it changes. */
export function size(tell: (width: number, height: number) => void): Attachment<HTMLElement> {
  return (element) => {
    const measure = () => {
      const { width, height } = element.getBoundingClientRect();
      if (width > 0 && height > 0) tell(Math.floor(width), Math.floor(height));
    };
    measure();
    const observer = new ResizeObserver(measure);
    observer.observe(element);
    return () => {
      observer.disconnect();
    };
  };
}
