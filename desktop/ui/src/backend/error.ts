import type { Failure } from './types';

/** The one kind of error that leaves this folder. */
export class BackendError extends Error {
  override readonly name = 'BackendError';
  /** A word that the window may act on. */
  readonly code: string;

  constructor(failure: Failure) {
    super(failure.message);
    this.code = failure.code;
  }

  /** Whatever was thrown, as one of ours. */
  static from(thrown: unknown): BackendError {
    if (thrown instanceof BackendError) return thrown;
    if (isFailure(thrown)) return new BackendError(thrown);
    const detail = thrown instanceof Error ? thrown.message : String(thrown);
    return new BackendError({
      code: 'unexpected',
      message: `The program did not answer as it should (${detail}). Nothing was changed. Try again; if it stays, close the window and open it anew.`,
    });
  }
}

function isFailure(thrown: unknown): thrown is Failure {
  return (
    typeof thrown === 'object' &&
    thrown !== null &&
    'code' in thrown &&
    typeof thrown.code === 'string' &&
    'message' in thrown &&
    typeof thrown.message === 'string'
  );
}
