import { getContext, setContext } from 'svelte';
import type {
  Backend,
  InstrumentNow,
  MomentView,
  Opened,
  SectionView,
  Signature,
  Theme,
  Units,
  WorkStep,
} from '../../backend/backend';
import { Asked } from '../../shared/asked.svelte';
import { everyFrame } from '../../shared/frame';
import { mostPressing } from '../trigger/words';
import { recall, remember } from './memory';

export const VIEWS = [
  ['section', 'Section'],
  ['reading', 'Reading'],
  ['working', 'Working'],
  ['instruments', 'Instruments'],
  ['faults', 'Equipment faults'],
  ['limits', 'Limits'],
  ['import', 'Import'],
  ['log', 'Log'],
  ['site', 'Site'],
] as const;

export type View = (typeof VIEWS)[number][0];

const THEMES: readonly Theme[] = ['light', 'dark', 'sunlight'];
const UNITS: readonly Units[] = ['si', 'us_customary'];

interface Moment {
  timeMs: number;
  units: Units;
}

/** What every view shares: what is open, the moment of the cursor, the chosen instrument, units and colours. */
export class Session {
  readonly backend: Backend;
  opened = $state.raw<Opened | null>(null);
  openError = $state.raw<unknown>(null);
  /** Long work under way and how far it has come; null when there is none. */
  work = $state.raw<WorkStep | null>(null);
  view = $state<View>('section');
  units = $state<Units>(recall('units', UNITS) ?? 'si');
  theme = $state<Theme>(recall('theme', THEMES) ?? systemTheme());
  singleKeys = $state(recall('single keys', ['on', 'off']) !== 'off');
  cursorMs = $state(0);
  /** Rises whenever something was written, so that answers are fetched anew. */
  revision = $state(0);
  /** What is looked for in the list of instruments. */
  sought = $state('');
  /** Who signs, kept while the window is open. */
  who = $state('');
  #picked = $state<string | null>(null);
  #asking = everyFrame<Moment>((moment) => {
    this.moment.ask(moment);
  });
  readonly moment: Asked<Moment, MomentView>;
  readonly section: Asked<Units, SectionView>;

  constructor(backend: Backend) {
    this.backend = backend;
    this.moment = new Asked(({ timeMs, units }) => backend.moment(timeMs, units));
    this.section = new Asked((units) => backend.section(units));
  }

  /** The instrument whose numbers are shown: the one picked, else the most pressing. */
  get chosen(): InstrumentNow | null {
    const all = this.moment.value?.instruments ?? [];
    return all.find((one) => one.id === this.#picked) ?? mostPressing(all) ?? null;
  }

  /** Picks an instrument; null goes back to the most pressing one. */
  choose(id: string | null): void {
    this.#picked = id;
  }

  /** Moves the cursor, within what is open; the moment follows once in a frame at most. */
  moveTo(timeMs: number): void {
    if (!this.opened) return;
    const { from_ms, to_ms } = this.opened;
    this.cursorMs = Math.max(from_ms, Math.min(to_ms, timeMs));
  }

  /** Fetches the moment of the cursor; called when cursor, units or content change. */
  refresh(): void {
    if (this.opened) this.#asking({ timeMs: this.cursorMs, units: this.units });
  }

  go(view: View): void {
    this.view = view;
  }

  setUnits(units: Units): void {
    this.units = units;
    remember('units', units);
  }

  setTheme(theme: Theme): void {
    this.theme = theme;
    remember('theme', theme);
  }

  setSingleKeys(on: boolean): void {
    this.singleKeys = on;
    remember('single keys', on ? 'on' : 'off');
  }

  nextUnits(): void {
    this.setUnits(this.units === 'si' ? 'us_customary' : 'si');
  }

  nextTheme(): void {
    this.setTheme(THEMES[(THEMES.indexOf(this.theme) + 1) % THEMES.length] ?? 'light');
  }

  /** What was open last, else the invented site. */
  start(): Promise<void> {
    return this.#open(async () => {
      await this.backend.followWork((step) => {
        if (this.work) this.work = step;
      });
      return (await this.backend.opened()) ?? this.backend.openDemo(null);
    });
  }

  /** Does what takes long, with its progress to be seen. */
  async during<T>(what: string, act: () => Promise<T>): Promise<T> {
    this.work = { what, done: 0 };
    try {
      return await act();
    } finally {
      this.work = null;
    }
  }

  cancel(): void {
    void this.backend.cancelWork();
  }

  openDemo(run: string | null): Promise<void> {
    return this.#open(() => this.backend.openDemo(run));
  }

  openStore(path: string): Promise<void> {
    return this.#open(() => this.backend.openStore(path));
  }

  /** A new site in a file of its own; false when the person thinks better of it. */
  async newStore(text: string, signature: Signature): Promise<boolean> {
    const opened = await this.during('Keeping the new site', () =>
      this.backend.newStore(text, signature),
    );
    if (opened) this.#show(opened);
    return opened !== null;
  }

  /** After something was written. */
  written(): void {
    this.revision += 1;
  }

  /** After readings came in: the last moment may be later than before. */
  async readAgain(): Promise<void> {
    const opened = await this.backend.opened();
    if (opened) this.opened = opened;
    this.written();
  }

  async #open(ask: () => Promise<Opened>): Promise<void> {
    try {
      this.#show(await this.during('Opening the site', ask));
    } catch (error) {
      this.openError = error;
    }
  }

  #show(opened: Opened): void {
    this.moment.forget();
    this.section.forget();
    this.#picked = null;
    this.opened = opened;
    this.openError = null;
    this.cursorMs = opened.last_ms;
    this.written();
  }
}

function systemTheme(): Theme {
  return matchMedia('(prefers-color-scheme: dark)').matches ? 'dark' : 'light';
}

const KEY = Symbol('session');

export function provideSession(session: Session): Session {
  return setContext(KEY, session);
}

export function useSession(): Session {
  return getContext<Session>(KEY);
}
