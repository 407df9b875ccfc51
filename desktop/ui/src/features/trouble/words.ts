// What the window does about each code of a failure.

export interface Treatment {
  /** What could not be done. */
  title: string;
  /** Whether trying again may help. */
  again: boolean;
}

const byCode: Record<string, Treatment> = {
  'nothing-open': { title: 'No site is open', again: false },
  panic: { title: 'The program failed inside itself', again: true },
  'not-chosen': { title: 'Nobody chose this file', again: false },
  cancelled: { title: 'Stopped', again: true },
  'unknown-instrument': { title: 'No such instrument', again: false },
  'unknown-run': { title: 'No such run', again: false },
  'demo-missing': { title: 'The demo is not there', again: true },
  'not-a-time': { title: 'Not a time', again: false },
  'site-problems': { title: 'The site file is not good yet', again: false },
  'import-failed': { title: 'Nothing was imported', again: true },
  'compare-failed': { title: 'The readings cannot be compared', again: true },
  'expect-failed': { title: 'Nothing can be expected', again: true },
  'chart-failed': { title: 'The chart cannot be drawn', again: true },
  'contours-failed': { title: 'No contours', again: true },
  'store-missing': { title: 'The store is not there', again: true },
  'not-a-store': { title: 'Not a store', again: false },
  'newer-schema': { title: 'Written by a newer version', again: false },
  'store-locked': { title: 'The store is in use', again: true },
  'disk-full': { title: 'The disk is full', again: true },
  'no-access': { title: 'No access', again: true },
  'disk-failing': { title: 'The disk fails', again: true },
  'store-damaged': { title: 'The store is damaged', again: false },
  refused: { title: 'Not accepted', again: false },
  'limit-problems': { title: 'The limits are not good yet', again: false },
  backdated: { title: 'Limits cannot count from the past', again: false },
  'clock-went-back': { title: 'The clock went back', again: false },
  'two-approvers': { title: 'A second person must approve', again: false },
  'loosens-unsaid': { title: 'These limits are looser', again: false },
  'limits-in-site': { title: 'Limits are changed elsewhere', again: false },
  'no-shell': { title: 'No program behind this page', again: false },
};

/** Unknown codes are shown as what they are: something that went wrong, with its message. */
export function treatment(code: string): Treatment {
  return byCode[code] ?? { title: 'That did not work', again: true };
}
