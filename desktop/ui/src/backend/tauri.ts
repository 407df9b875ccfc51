// The shell of the desktop companion.
import { Channel, invoke } from '@tauri-apps/api/core';
import type { Backend } from './backend';
import { BackendError } from './error';
import type { WorkStep } from './types';

async function call<T>(command: string, args: Record<string, unknown> = {}): Promise<T> {
  try {
    return await invoke<T>(command, args);
  } catch (thrown) {
    throw BackendError.from(thrown);
  }
}

/** Whether the window runs in the shell. */
export function inShell(): boolean {
  return '__TAURI_INTERNALS__' in globalThis;
}

export const tauri: Backend = {
  openDemo: (run) => call('open_demo', { run }),
  openStore: (path) => call('open_store', { path }),
  newStore: (text, signature) => call('new_store', { text, ...signature }),
  followWork: (tell) => {
    const channel = new Channel<WorkStep>();
    channel.onmessage = tell;
    return call('follow_work', { channel });
  },
  cancelWork: () => call('cancel_work'),
  opened: () => call('opened'),
  moment: (timeMs, units) => call('moment', { timeMs, units }),
  section: (units) => call('section', { units }),
  contours: (field, timeMs, units) => call('contours', { field, timeMs, units }),
  fillLine: (picture, units) => call('fill_line', { ...picture, units }),
  reading: (id, timeMs, units) => call('reading', { id, timeMs, units }),
  readingChart: (chart, units) => call('reading_chart', { ...chart, units }),
  working: (id, timeMs, units) => call('working', { id, timeMs, units }),
  faults: (timeMs, units) => call('faults', { timeMs, units }),
  instruments: (units) => call('instruments', { units }),
  log: (units) => call('log', { units }),
  decide: (decision, timeMs, signature, units) =>
    call('decide', { decision, timeMs, ...signature, units }),
  note: (id, timeMs, who, text, units) => call('note', { id, timeMs, who, text, units }),
  limits: (units) => call('limits', { units }),
  proposeLimits: (proposal, units) => call('propose_limits', { ...proposal, units }),
  importPreview: (paths, corrections) => call('import_preview', { paths, corrections }),
  importCommit: (paths, corrections, signature) =>
    call('import_commit', { paths, corrections, ...signature }),
  siteText: () => call('site_text'),
  siteCheck: (text, units) => call('site_check', { text, units }),
  siteSave: (text, signature) => call('site_save', { text, ...signature }),
  chooseReadings: () => call('choose_readings'),
  chooseStore: () => call('choose_store'),
};
