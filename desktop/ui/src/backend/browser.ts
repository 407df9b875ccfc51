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
  InstrumentNow,
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

interface Recorded {
  moments: {
    strips: Omit<MomentView, 'instruments'>[];
    instruments: { time_ms: number; instruments: InstrumentNow[] }[];
  };
  section: SectionView;
  contours: Record<Field, ContoursView>;
  fill: ChartView;
  charts: Record<string, { time: ChartView; pressure: ChartView }>;
  readings: (Omit<ReadingView, 'now'> & { id: string })[];
}

interface Common {
  opened: Opened;
  working: WorkingView;
  faults: FaultView[];
  log: LogView;
  limits: LimitsView;
  infos: InstrumentInfo[];
  preview: ImportView;
  site_text: string;
}

/** The last one that is not after the moment, else the first. */
function at<T extends { time_ms: number }>(recorded: readonly T[], timeMs: number): T {
  const found = recorded.findLast((one) => one.time_ms <= timeMs) ?? recorded[0];
  if (!found) throw new BackendError({ code: 'nothing-open', message: 'Nothing is recorded.' });
  return found;
}

export async function browser(): Promise<Backend> {
  const load = async <T>(file: Promise<{ default: unknown }>) => (await file).default as T;
  const common = await load<Common>(import('./standin/common.json'));
  const files: Record<Units, () => Promise<Recorded>> = {
    si: () => load<Recorded>(import('./standin/si.json')),
    us_customary: () => load<Recorded>(import('./standin/us_customary.json')),
  };
  const recorded = (units: Units) => files[units]();
  const unwritable = () =>
    Promise.reject(
      new BackendError({
        code: 'refused',
        message:
          'Nothing can be written in a browser: these answers are recorded. Start the companion to write.',
      }),
    );

  return {
    openDemo: (run) => Promise.resolve({ ...common.opened, run: run ?? common.opened.run }),
    openStore: unwritable,
    opened: () => Promise.resolve(null),
    moment: async (timeMs, units) => {
      const { moments } = await recorded(units);
      const { instruments } = at(moments.instruments, timeMs);
      return { ...at(moments.strips, timeMs), instruments };
    },
    section: async (units) => (await recorded(units)).section,
    contours: async (field, _timeMs, units) => (await recorded(units)).contours[field],
    fillLine: async (_timeMs, _picture, units) => (await recorded(units)).fill,
    reading: async (id, timeMs, units) => {
      const { readings, moments } = await recorded(units);
      const reading = readings.find((one) => one.id === id);
      const now = at(moments.instruments, timeMs).instruments.find((one) => one.id === id);
      if (!reading || !now) throw unknown(id);
      return { ...reading, now };
    },
    readingChart: async ({ id, against }, units) => {
      const chart = (await recorded(units)).charts[id];
      if (!chart) {
        throw new BackendError({
          code: 'chart-failed',
          message: `No chart of ${id} is recorded. PE1, SC3 and PC2 have one; the companion draws all.`,
        });
      }
      return chart[against];
    },
    working: () => Promise.resolve(common.working),
    faults: () => Promise.resolve(common.faults),
    instruments: () => Promise.resolve(common.infos),
    log: () => Promise.resolve(common.log),
    decide: unwritable,
    note: unwritable,
    limits: () => Promise.resolve(common.limits),
    proposeLimits: unwritable,
    importPreview: () => Promise.resolve(common.preview),
    importCommit: unwritable,
    siteText: () => Promise.resolve({ text: common.site_text, version: 1, versions: [] }),
    siteCheck: async (text, units) => check(text, (await recorded(units)).section),
    siteSave: unwritable,
    chooseReadings: () => Promise.resolve(['logger-a-2026-05.csv', 'east-hand-readings.csv']),
    chooseStore: () => Promise.resolve(null),
  };
}

function unknown(id: string): BackendError {
  return new BackendError({
    code: 'unknown-instrument',
    message: `The site has no instrument ${id}. Choose one of its list.`,
  });
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
