import type { Backend, Units } from '../../backend/backend';
import { Asked, askAtRest } from '../../shared/asked.svelte';
import type { Session } from './session.svelte';

/** What an answer about a moment depends on; a type, so that it also is a record. */
export type AtCursor = {
  timeMs: number;
  units: Units;
  /** An instrument, where the answer is about one. */
  id: string | null;
};

/** How long the cursor must rest before what takes longer than a moment is asked for, ms. */
export const REST_MS = 120;

/** Keeps an answer about the moment of the cursor up to date. */
export function followCursor<A>(
  session: Session,
  about: () => string | null,
  ask: (backend: Backend, question: AtCursor) => Promise<A>,
): Asked<AtCursor, A> {
  const asked = new Asked<AtCursor, A>((question) => ask(session.backend, question));
  const follow = askAtRest(asked, REST_MS);
  $effect(() => {
    const question = { id: about(), timeMs: session.cursorMs, units: session.units };
    follow(question, session.revision);
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
