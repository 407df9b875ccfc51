import { WhenQuiet } from './frame';
import { Latest } from './latest';

/**
 * An answer that is fetched: waiting, there, or failed. While a newer one is under way the older
 * one stays to be seen. It is the newest question that counts.
 */
export class Asked<Q, A> {
  value = $state.raw<A | null>(null);
  error = $state.raw<unknown>(null);
  /** The question that `value` answers. */
  answered = $state.raw<Q | null>(null);
  #latest: Latest<Q, A>;
  /** The newest question. */
  question: Q | null = null;

  constructor(ask: (question: Q) => Promise<A>) {
    this.#latest = new Latest(
      ask,
      (answer, question) => {
        this.value = answer;
        this.answered = question;
        this.error = null;
      },
      (error) => {
        this.error = error;
      },
    );
  }

  ask(question: Q): void {
    this.question = question;
    this.#latest.request(question);
  }

  again(): void {
    if (this.question !== null) this.ask(this.question);
  }

  /** Takes an answer that came another way, such as with what was just written. */
  take(answer: A): void {
    this.value = answer;
    this.error = null;
  }

  /** Forgets the answer, so that nothing of another site stays on the page. */
  forget(): void {
    this.value = null;
    this.answered = null;
    this.error = null;
  }
}

/** What an answer depends on: a moment, and what else. */
export type AtMoment = { timeMs: number } & Record<string, unknown>;

/**
 * Asks at once for something else, and once the moment rests when only the moment moved: what
 * takes long must not be asked for at every step of a drag. What came earlier never comes after.
 * It reads no state, so that an effect may call it without being run again by the answer.
 */
export function askAtRest<Q extends AtMoment, A>(
  asked: Asked<Q, A>,
  quietMs: number,
): (question: Q, revision: number) => void {
  const rest = new WhenQuiet<Q>(quietMs, (question) => {
    asked.ask(question);
  });
  let before = '';
  return (question, revision) => {
    const other = JSON.stringify({ ...question, timeMs: 0, revision });
    if (other === before) {
      rest.set(question);
      return;
    }
    before = other;
    rest.drop();
    asked.ask(question);
  };
}
