import type { InstrumentNow, TriggerView } from '../../backend/backend';

/** Rising. */
export const TRIGGERS: readonly TriggerView[] = ['normal', 'watch', 'review', 'stop'];

export const triggerWord: Record<TriggerView, string> = {
  normal: 'Normal',
  watch: 'Watch',
  review: 'Review',
  stop: 'Stop',
};

export const rank = (trigger: TriggerView): number => TRIGGERS.indexOf(trigger);

/** Trigger and what is known of it, as it is written beside a mark. */
export function phrase(now: InstrumentNow): string {
  const word = triggerWord[now.trigger];
  if (now.held) return `${word}, held`;
  if (now.not_judged) return 'Not judged';
  if (now.fault !== null && now.trigger === 'normal') return 'No verdict';
  return !now.confirmed && now.trigger !== 'normal' ? `${word}, unconfirmed` : word;
}

/** Everything about an instrument at the cursor in one line, for hover and for a screen reader. */
export function inOneLine(now: InstrumentNow): string {
  const reading = now.reading ? `${now.reading.text}, ${now.age} old` : 'no reading yet';
  const band =
    now.band_low && now.band_high ? `, expected ${now.band_low.text} to ${now.band_high.text}` : '';
  const fault = now.fault === null ? '' : `. Equipment fault: ${now.data_state}`;
  return `${now.id} ${now.kind}, ${now.place}: ${phrase(now)}, ${reading}${band}${fault}`;
}

/** The most pressing instrument: highest trigger, then furthest out of its band. */
export function mostPressing(instruments: readonly InstrumentNow[]): InstrumentNow | undefined {
  const out = (now: InstrumentNow) => Math.abs(now.band_position ?? 0);
  return [...instruments].sort((a, b) => rank(b.trigger) - rank(a.trigger) || out(b) - out(a))[0];
}
