/** A form on its way: one at a time, with the failure kept where the form stands. */
export class Sending {
  busy = $state(false);
  error = $state.raw<unknown>(null);

  /** Sends and tells whether it arrived. */
  async send(act: () => Promise<void>): Promise<boolean> {
    if (this.busy) return false;
    this.busy = true;
    this.error = null;
    try {
      await act();
    } catch (thrown) {
      this.error = thrown;
    }
    this.busy = false;
    return this.error === null;
  }
}
