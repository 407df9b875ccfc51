import type { Backend, Units } from '../../backend/backend';
import { Asked } from '../../shared/asked.svelte';
import { whenQuiet } from '../../shared/frame';
import type { Session } from './session.svelte';

/** What an answer about a moment depends on. */
export interface AtCursor {
  timeMs: number;
  units: Units;
  /** An instrument, where the answer is about one. */
  id: string | null;
}

/**
 * Keeps an answer about the moment of the cursor up to date: at once for another instrument, other
 * units or new content; when the cursor rests while it is dragged.
 */
export function followCursor<A>(
  session: Session,
  about: () => string | null,
  ask: (backend: Backend, question: AtCursor) => Promise<A>,
): Asked<AtCursor, A> {
  const asked = new Asked<AtCursor, A>((question) => ask(session.backend, question));
  const later = whenQuiet<AtCursor>(120, (question) => {
    asked.ask(question);
  });
  let revision = -1;
  $effect(() => {
    const question = { id: about(), timeMs: session.cursorMs, units: session.units };
    const before = asked.question;
    const onlyMoved =
      before?.id === question.id &&
      before.units === question.units &&
      revision === session.revision;
    revision = session.revision;
    if (onlyMoved) later(question);
    else asked.ask(question);
  });
  return asked;
}

/** Keeps an answer that does not depend on the cursor up to date. */
export function followContent<A>(
  session: Session,
  ask: (backend: Backend, units: Units) => Promise<A>,
): Asked<Units, A> {
  const asked = new Asked<Units, A>((units) => ask(session.backend, units));
  $effect(() => {
    void session.revision;
    asked.ask(session.units);
  });
  return asked;
}
