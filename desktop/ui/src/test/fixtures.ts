import type { Backend, InstrumentNow } from '../backend/backend';
import { browser } from '../backend/browser';

/** The recorded answers, some of them replaced. */
export async function backendWith(replaced: Partial<Backend> = {}): Promise<Backend> {
  return { ...(await browser()), ...replaced };
}

/** An instrument as a test needs it. */
export function instrument(given: Partial<InstrumentNow> = {}): InstrumentNow {
  return {
    id: 'PE1',
    kind: 'piezometer',
    place: 'east edge, 4 m deep, soft organic clay',
    trigger: 'normal',
    confirmed: true,
    held: false,
    not_judged: false,
    data_state: 'good',
    fault: null,
    reading: { value: 80.3, unit: 'kPa', text: '80.3 kPa' },
    expected: { value: 71.4, unit: 'kPa', text: '71.4 kPa' },
    band_low: { value: 63.5, unit: 'kPa', text: '63.5 kPa' },
    band_high: { value: 79.4, unit: 'kPa', text: '79.4 kPa' },
    band_position: 0.2,
    margin: '5.5 kPa to Watch',
    age: '8 min',
    objection: null,
    section_x_m: 23.5,
    depth_m: 4,
    off_section_m: 0,
    ...given,
  };
}
