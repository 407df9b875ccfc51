// The door to the shell. Nothing else in the window asks the shell, the disk or a network.
import type { ChartView } from './generated/ChartView';
import type { ContoursView } from './generated/ContoursView';
import type { FaultView } from './generated/FaultView';
import type { Field } from './generated/Field';
import type { MomentView } from './generated/MomentView';
import type { Opened } from './generated/Opened';
import type { ReadingView } from './generated/ReadingView';
import type { SectionView } from './generated/SectionView';
import type { Theme } from './generated/Theme';
import type { Units } from './generated/Units';
import type { WorkingView } from './generated/WorkingView';
import type {
  Decision,
  ImportCorrection,
  ImportDone,
  ImportView,
  InstrumentInfo,
  LimitProposal,
  LimitsView,
  LogView,
  SiteCheckView,
  SiteTextView,
} from './records';

export type { ChartView } from './generated/ChartView';
export type { ContourLine } from './generated/ContourLine';
export type { ContoursView } from './generated/ContoursView';
export type { EntryView } from './generated/EntryView';
export type { FaultView } from './generated/FaultView';
export type { Field } from './generated/Field';
export type { HoverPoint } from './generated/HoverPoint';
export type { InstrumentNow } from './generated/InstrumentNow';
export type { LayerView } from './generated/LayerView';
export type { MomentView } from './generated/MomentView';
export type { Opened } from './generated/Opened';
export type { Quantity } from './generated/Quantity';
export type { ReadingView } from './generated/ReadingView';
export type { SectionView } from './generated/SectionView';
export type { TankView } from './generated/TankView';
export type { Theme } from './generated/Theme';
export type { TriggerView } from './generated/TriggerView';
export type { Units } from './generated/Units';
export type { WorkingLine } from './generated/WorkingLine';
export type { WorkingView } from './generated/WorkingView';
export type * from './records';
export { BackendError } from './error';

/** A picture as the page has room for it. */
export interface Picture {
  width: number;
  height: number;
  theme: Theme;
}

/** What may be left out of the chart of a reading. */
export type Hideable = 'band' | 'expected' | 'limits' | 'raw';

/** Which chart of a reading is asked for. */
export interface ReadingChart extends Picture {
  id: string;
  against: 'time' | 'pressure';
  timeMs: number;
  /** Ends of the time axis; null takes in everything. */
  range: [number, number] | null;
  hidden: Hideable[];
}

/** Who writes something down and why. */
export interface Signature {
  who: string;
  why: string;
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
  /** What is open; null when nothing is. */
  opened(): Promise<Opened | null>;
  moment(timeMs: number, units: Units): Promise<MomentView>;
  section(units: Units): Promise<SectionView>;
  contours(field: Field, timeMs: number, units: Units): Promise<ContoursView>;
  fillLine(timeMs: number, picture: Picture, units: Units): Promise<ChartView>;
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
