import type { Component } from 'svelte';
import type { View } from '../features/session/session.svelte';
import Faults from './Faults.svelte';
import Import from './Import.svelte';
import Instruments from './Instruments.svelte';
import Limits from './Limits.svelte';
import Log from './Log.svelte';
import Reading from './Reading.svelte';
import Site from './Site.svelte';
import Working from './Working.svelte';

/** Every view but the first. */
export const PAGES: Record<Exclude<View, 'section'>, Component> = {
  reading: Reading,
  working: Working,
  instruments: Instruments,
  faults: Faults,
  limits: Limits,
  import: Import,
  log: Log,
  site: Site,
};
