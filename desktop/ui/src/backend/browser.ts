// Stand-in for the shell: answers from recorded files, chosen by the moment. It calculates nothing;
// between two recorded moments the earlier one is shown.
import type { Backend } from './backend';
import { BackendError } from './error';
import type {
  ChartView,
  ContoursView,
  FaultView,
  Field,
  ImportView,
  InstrumentInfo,
  LimitsView,
  LogView,
  MomentView,
  Opened,
  ReadingView,
  SectionView,
  SiteCheckView,
  Units,
  WorkingView,
} from './types';

/** What the engine answered, in one system of units. */
interface Recorded {
  moments: MomentView[];
  section: SectionView;
  contours: Partial<Record<Field, ContoursView>>;
  fill_line: ChartView;
  charts: Record<string, { time: ChartView; pressure: ChartView }>;
  readings: ReadingView[];
  working: WorkingView;
  faults: FaultView[];
}

/** Invented by hand: what stands in a store that people have written to. */
interface Records {
  log: LogView;
  limits: LimitsView;
  infos: InstrumentInfo[];
  preview: ImportView;
  site_text: string;
}

/** The last one that is not after the moment, else the first. */
function at(recorded: readonly MomentView[], timeMs: number): MomentView {
  const found = recorded.findLast((one) => one.time_ms <= timeMs) ?? recorded[0];
  if (!found) throw new BackendError({ code: 'nothing-open', message: 'Nothing is recorded.' });
  return found;
}

export async function browser(): Promise<Backend> {
  const load = async <T>(file: Promise<{ default: unknown }>) => (await file).default as T;
  const opened = await load<Opened>(import('./standin/opened.json'));
  const records = await load<Records>(import('./standin/records.json'));
  const files: Record<Units, () => Promise<Recorded>> = {
    si: () => load<Recorded>(import('./standin/si.json')),
    us_customary: () => load<Recorded>(import('./standin/us_customary.json')),
  };
  const recorded = (units: Units) => files[units]();

  return {
    openDemo: (run) => Promise.resolve({ ...opened, run: run ?? opened.run }),
    openStore: unwritable,
    newStore: unwritable,
    followWork: () => Promise.resolve(),
    cancelWork: () => Promise.resolve(),
    opened: () => Promise.resolve(null),
    moment: async (timeMs, units) => at((await recorded(units)).moments, timeMs),
    section: async (units) => (await recorded(units)).section,
    contours: async (field, _timeMs, units) => {
      const contours = (await recorded(units)).contours[field];
      return contours ?? notRecorded('contours-failed', 'These contours are');
    },
    fillLine: async (_picture, units) => (await recorded(units)).fill_line,
    reading: async (id, timeMs, units) => {
      const { readings, moments } = await recorded(units);
      const reading = readings.find((one) => one.now.id === id);
      const now = at(moments, timeMs).instruments.find((one) => one.id === id);
      return reading && now ? { ...reading, now } : notRecorded('unknown-instrument', `${id} is`);
    },
    readingChart: async ({ id, against }, units) => {
      const charts = (await recorded(units)).charts[id];
      return charts ? charts[against] : notRecorded('chart-failed', `The chart of ${id} is`);
    },
    working: async (_id, _timeMs, units) => (await recorded(units)).working,
    faults: async (_timeMs, units) => (await recorded(units)).faults,
    instruments: () => Promise.resolve(records.infos),
    log: () => Promise.resolve(records.log),
    decide: unwritable,
    note: unwritable,
    limits: () => Promise.resolve(records.limits),
    proposeLimits: unwritable,
    importPreview: () => Promise.resolve(records.preview),
    importCommit: unwritable,
    siteText: () => Promise.resolve({ text: records.site_text, version: 1, versions: [] }),
    siteCheck: async (text, units) => check(text, (await recorded(units)).section),
    siteSave: unwritable,
    chooseReadings: () => Promise.resolve(['logger-a-2026-05.csv', 'east-hand-readings.csv']),
    chooseStore: () => Promise.resolve(null),
  };
}

function unwritable(): Promise<never> {
  return Promise.reject(
    new BackendError({
      code: 'refused',
      message:
        'Nothing can be written in a browser: these answers are recorded. Start the companion to write.',
    }),
  );
}

function notRecorded(code: string, what: string): Promise<never> {
  const message = `${what} not recorded for the window in a browser. The companion has all.`;
  return Promise.reject(new BackendError({ code, message }));
}

/** Tells only whether the text is JSON; the engine tells more. */
function check(text: string, section: SectionView): SiteCheckView {
  const whole: SiteCheckView = { problems: [], not_cross_checked: [], section, instruments: [] };
  try {
    JSON.parse(text);
    return whole;
  } catch (error) {
    const problem = {
      line: text.split('\n').length,
      column: 1,
      path: '',
      found: error instanceof Error ? error.message : String(error),
      allowed: 'JSON',
      remedy: 'Look for a comma or a bracket that is missing or too many before it.',
    };
    return { ...whole, problems: [problem], section: null };
  }
}
