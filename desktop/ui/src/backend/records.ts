// What the log, the limits, an import and the site file look like to the window.
import type { EntryView } from './generated/EntryView';
import type { SectionView } from './generated/SectionView';
import type { TriggerView } from './generated/TriggerView';

/** What a person decides. The program never does. */
export type Decision = 'continue' | 'hold' | 'lower' | 'empty';

/** One entry of the log. */
export interface LogEntryView {
  time_text: string;
  /** "decision: hold", "note", "limits 2", "site file 3". */
  what: string;
  who: string;
  text: string;
  /** What was known: level, applied pressure, age of the data. */
  basis: string | null;
  instrument: string | null;
  /** First characters of the hash that chains decisions. */
  hash: string | null;
}

/** The log, newest entry first. */
export interface LogView {
  entries: LogEntryView[];
  /** What working through the chain of decisions gave, in a sentence. */
  chain: string;
  chain_whole: boolean;
}

/** A version of the limits. */
export interface LimitVersionView {
  number: number;
  effective_text: string;
  entered_text: string;
  who: string;
  why: string;
  approvers: string[];
  loosens: boolean;
  in_force: boolean;
}

/** The limits of one instrument in words. */
export interface LimitRowView {
  id: string;
  kind: string;
  place: string;
  limits: [TriggerView, string][];
  persistence: string;
  hysteresis: string;
}

/** The limits in force and all versions, newest first. */
export interface LimitsView {
  versions: LimitVersionView[];
  rows: LimitRowView[];
  /** The document of the limits in force, to edit. */
  text: string;
}

/** New limits as a person proposes them. */
export interface LimitProposal {
  text: string;
  who: string;
  why: string;
  approvers: string[];
  /** From when they count, "2026-05-20 06:00" in the zone of the site. */
  effective: string;
  /** Whether the person says that they are looser. */
  loosens: boolean;
}

/** What does not change with the cursor. */
export interface InstrumentInfo {
  id: string;
  kind: string;
  place: string;
  unit: string;
  range: string;
  stale_after: string;
  neighbours: string[];
  correction: string | null;
  /** What its limits are, or why it has none. */
  judged_by: string;
}

/** A column of a file of readings, as understood. */
export interface ImportColumn {
  header: string;
  instrument: string | null;
  unit: string | null;
  /** Units that it could be in. */
  units: string[];
  /** Why it is not taken. */
  note: string | null;
}

/** What would become, or became, of a file. */
export interface ImportFile {
  file: string;
  layout: string;
  guessed: boolean;
  rows: number;
  accepted: number;
  readings: number;
  missing: number;
  /** Line, column, what stands there, why it is refused. */
  refused: [number, string, string, string][];
  refused_count: number;
  span: string | null;
  notes: string[];
  columns: ImportColumn[];
}

/** What an import would do. */
export interface ImportView {
  files: ImportFile[];
  suspicions: string[];
  duplicates: number;
  conflicts: string[];
  gaps: string[];
  readings: number;
  /** Instruments to choose from. */
  instruments: string[];
}

/** What a person says a column is. */
export interface ImportCorrection {
  file: string;
  header: string;
  instrument: string | null;
  unit: string | null;
}

/** What an import did. */
export interface ImportDone {
  sentence: string[];
  readings: number;
  duplicates: number;
}

/** Something to put right in the site file. */
export interface ProblemView {
  line: number;
  column: number;
  path: string;
  found: string;
  allowed: string;
  remedy: string;
}

/** An instrument of a site that is being written. */
export interface SitePoint {
  id: string;
  kind: string;
  section_x_m: number;
  depth_m: number;
}

/** What checking a site file gave. */
export interface SiteCheckView {
  problems: ProblemView[];
  not_cross_checked: string[];
  /** The drawing, as far as the text can be understood. */
  section: SectionView | null;
  instruments: SitePoint[];
}

/** The site file in force. */
export interface SiteTextView {
  text: string;
  version: number;
  versions: EntryView[];
}
