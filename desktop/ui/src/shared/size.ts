import type { Attachment } from 'svelte/attachments';

/** Tells the size of an element in whole px, at once and whenever it changes. */
export function size(tell: (width: number, height: number) => void): Attachment<HTMLElement> {
  return (element) => {
    let told = '';
    const measure = () => {
      const box = element.getBoundingClientRect();
      const [width, height] = [Math.floor(box.width), Math.floor(box.height)];
      const now = `${String(width)} ${String(height)}`;
      if (width <= 0 || height <= 0 || now === told) return;
      told = now;
      tell(width, height);
    };
    measure();
    const observer = new ResizeObserver(measure);
    observer.observe(element);
    return () => {
      observer.disconnect();
    };
  };
}
