import type { Attachment } from 'svelte/attachments';

/**
 * One stop for the Tab key in a list; arrows, Home and End move inside it. Items are the elements
 * that match `selector`; the one that has focus keeps the stop.
 */
export function roving(selector: string): Attachment<HTMLElement> {
  return (list) => {
    const items = () => [...list.querySelectorAll<HTMLElement>(selector)];
    const stopAt = (chosen: HTMLElement | undefined) => {
      for (const item of items()) item.tabIndex = item === chosen ? 0 : -1;
    };
    const tidy = () => {
      const all = items();
      const current =
        all.find((item) => item === document.activeElement) ??
        all.find((item) => item.getAttribute('aria-current') === 'true') ??
        all.find((item) => item.tabIndex === 0) ??
        all[0];
      stopAt(current);
    };
    const move = (event: KeyboardEvent) => {
      const all = items();
      const at = all.indexOf(document.activeElement as HTMLElement);
      if (at < 0) return;
      const to = { ArrowDown: at + 1, ArrowUp: at - 1, Home: 0, End: all.length - 1 }[event.key];
      const next = to === undefined ? undefined : all[Math.max(0, Math.min(all.length - 1, to))];
      if (!next) return;
      event.preventDefault();
      stopAt(next);
      next.focus();
    };
    const focused = (event: FocusEvent) => {
      const item = items().find((candidate) => candidate === event.target);
      if (item) stopAt(item);
    };
    const observer = new MutationObserver(tidy);
    observer.observe(list, { childList: true, subtree: true });
    list.addEventListener('keydown', move);
    list.addEventListener('focusin', focused);
    tidy();
    return () => {
      observer.disconnect();
      list.removeEventListener('keydown', move);
      list.removeEventListener('focusin', focused);
    };
  };
}
