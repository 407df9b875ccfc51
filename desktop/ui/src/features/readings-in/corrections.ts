import type { ImportColumn, ImportCorrection } from '../../backend/backend';

/** The corrections with one more; the newest for a column counts. */
export function corrected(
  before: readonly ImportCorrection[],
  file: string,
  column: ImportColumn,
  change: { instrument?: string | null; unit?: string | null },
): ImportCorrection[] {
  const isThis = (one: ImportCorrection) => one.file === file && one.header === column.header;
  const old = before.find(isThis) ?? { instrument: column.instrument, unit: column.unit };
  const next = {
    file,
    header: column.header,
    instrument: old.instrument,
    unit: old.unit,
    ...change,
  };
  return [...before.filter((one) => !isThis(one)), next];
}
