import type { Backend } from './backend';
import { BackendError } from './error';
import { inShell, tauri } from './tauri';

/** The shell; while the window is being worked on in a browser, a stand-in with recorded answers. */
export async function connect(): Promise<Backend> {
  if (inShell()) return tauri;
  if (import.meta.env.MODE === 'production') {
    throw new BackendError({
      code: 'no-shell',
      message:
        'This page is the window of the Brimstead companion and shows nothing by itself. Start the companion.',
    });
  }
  const { browser } = await import('./browser');
  return browser();
}
