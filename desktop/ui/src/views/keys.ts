import { VIEWS, type Session } from '../features/session/session.svelte';

const HOUR_MS = 3_600_000;

/** Whether the key is meant for the page and not for a field that is being written in. */
function isFree(event: KeyboardEvent): boolean {
  if (event.ctrlKey || event.altKey || event.metaKey || event.defaultPrevented) return false;
  const target = event.target;
  if (!(target instanceof Element)) return true;
  return !target.closest(
    'input:not([type=radio], [type=checkbox]), textarea, select, dialog, [contenteditable]',
  );
}

export interface Jumps {
  earlier: () => void;
  later: () => void;
}

/** Keys that work anywhere; true when the key was one of them. */
export function anywhere(
  event: KeyboardEvent,
  session: Session,
  jumps: Jumps,
  showKeys: () => void,
): boolean {
  if (!session.singleKeys || !isFree(event)) return false;
  const view = VIEWS[Number.parseInt(event.key, 10) - 1];
  const does: Record<string, () => void> = {
    '[': jumps.earlier,
    ']': jumps.later,
    '<': () => {
      session.moveTo(session.cursorMs - HOUR_MS);
    },
    '>': () => {
      session.moveTo(session.cursorMs + HOUR_MS);
    },
    l: () => {
      if (session.opened) session.moveTo(session.opened.last_ms);
    },
    p: () => {
      session.choose(null);
    },
    u: () => {
      session.nextUnits();
    },
    t: () => {
      session.nextTheme();
    },
    '?': showKeys,
  };
  const act =
    view === undefined
      ? does[event.key]
      : () => {
          session.go(view[0]);
        };
  if (!act) return false;
  event.preventDefault();
  act();
  return true;
}
