import type { InstrumentNow } from '../../backend/backend';
import { rank } from '../trigger/words';

export type Column = 'id' | 'kind' | 'place' | 'trigger' | 'reading' | 'band' | 'state';

/** Sorted by a column; what is equal there stays in the order of the site file. */
export function sorted(
  all: readonly InstrumentNow[],
  column: Column,
  falling: boolean,
): InstrumentNow[] {
  const by: Record<Column, (now: InstrumentNow) => string | number> = {
    id: (now) => now.id,
    kind: (now) => now.kind,
    place: (now) => now.place,
    trigger: (now) => rank(now.trigger) * 10 + (now.fault === null ? 0 : 1),
    reading: (now) => now.reading?.value ?? Number.NEGATIVE_INFINITY,
    band: (now) => now.band_position ?? Number.NEGATIVE_INFINITY,
    state: (now) => (now.data_state === 'good' ? '' : now.data_state),
  };
  const key = by[column];
  const way = falling ? -1 : 1;
  return [...all].sort((a, b) => {
    const [ka, kb] = [key(a), key(b)];
    if (typeof ka === 'string' && typeof kb === 'string')
      return way * ka.localeCompare(kb, 'en', { numeric: true });
    return way * (Number(ka) - Number(kb)) || 0;
  });
}

/** Those with every word of the search in their id, kind, place, trigger or state. */
export function found(all: readonly InstrumentNow[], search: string): InstrumentNow[] {
  const words = search.toLowerCase().split(/\s+/).filter(Boolean);
  return all.filter((now) => {
    const text =
      `${now.id} ${now.kind} ${now.place} ${now.trigger} ${now.data_state}`.toLowerCase();
    return words.every((word) => text.includes(word));
  });
}
