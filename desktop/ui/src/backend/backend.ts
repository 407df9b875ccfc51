// The door to the shell. Nothing else in the window asks the shell, the disk or a network.
import type {
  Against,
  ChartView,
  ContoursView,
  Decision,
  FaultView,
  Field,
  Hidden,
  ImportCorrection,
  ImportDone,
  ImportView,
  InstrumentInfo,
  LimitProposal,
  LimitsView,
  LogView,
  MomentView,
  Opened,
  Picture,
  ReadingView,
  SectionView,
  Signature,
  SiteCheckView,
  SiteTextView,
  Units,
  WorkingView,
  WorkStep,
} from './types';

export type * from './types';
export { BackendError } from './error';

/** Which chart of a reading is asked for. */
export interface ReadingChart extends Picture {
  id: string;
  against: Against;
  timeMs: number;
  /** Ends of the time axis; null takes in everything. */
  range: [number, number] | null;
  hidden: Hidden[];
}

/**
 * Everything the window can ask for. Times are milliseconds of Unix time; every number in an answer
 * is in the units asked for and has its text. A promise is rejected with a `BackendError` only.
 */
export interface Backend {
  /** Opens the invented site, at the given run or the first one. */
  openDemo(run: string | null): Promise<Opened>;
  /** Opens the store of a site. */
  openStore(path: string): Promise<Opened>;
  /** Keeps a new site in a file that the person chooses, and opens it; null when they think better of it. */
  newStore(text: string, signature: Signature): Promise<Opened | null>;
  /** Tells how far long work has come, from now on. */
  followWork(tell: (step: WorkStep) => void): Promise<void>;
  /** Stops the long work under way; what was asked for is then rejected with the code "cancelled". */
  cancelWork(): Promise<void>;
  /** What is open; null when nothing is. */
  opened(): Promise<Opened | null>;
  moment(timeMs: number, units: Units): Promise<MomentView>;
  section(units: Units): Promise<SectionView>;
  contours(field: Field, timeMs: number, units: Units): Promise<ContoursView>;
  fillLine(picture: Picture, units: Units): Promise<ChartView>;
  reading(id: string, timeMs: number, units: Units): Promise<ReadingView>;
  readingChart(chart: ReadingChart, units: Units): Promise<ChartView>;
  working(id: string, timeMs: number, units: Units): Promise<WorkingView>;
  faults(timeMs: number, units: Units): Promise<FaultView[]>;
  instruments(units: Units): Promise<InstrumentInfo[]>;
  log(units: Units): Promise<LogView>;
  decide(decision: Decision, timeMs: number, signature: Signature, units: Units): Promise<LogView>;
  note(
    id: string | null,
    timeMs: number,
    who: string,
    text: string,
    units: Units,
  ): Promise<LogView>;
  limits(units: Units): Promise<LimitsView>;
  proposeLimits(proposal: LimitProposal, units: Units): Promise<LimitsView>;
  importPreview(paths: string[], corrections: ImportCorrection[]): Promise<ImportView>;
  importCommit(
    paths: string[],
    corrections: ImportCorrection[],
    signature: Signature,
  ): Promise<ImportDone>;
  siteText(): Promise<SiteTextView>;
  siteCheck(text: string, units: Units): Promise<SiteCheckView>;
  siteSave(text: string, signature: Signature): Promise<SiteTextView>;
  /** Files of readings that the person chooses; empty when they think better of it. */
  chooseReadings(): Promise<string[]>;
  /** The store that the person chooses; null when they think better of it. */
  chooseStore(): Promise<string | null>;
}
