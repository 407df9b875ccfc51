// Small choices kept on this machine; where nothing can be kept the window works all the same.

export function recall<T extends string>(name: string, allowed: readonly T[]): T | null {
  try {
    const found = localStorage.getItem(name);
    return allowed.find((value) => value === found) ?? null;
  } catch {
    return null;
  }
}

export function remember(name: string, value: string): void {
  try {
    localStorage.setItem(name, value);
  } catch {
    // Not kept: the next start asks the system again.
  }
}
