import { configure } from '@testing-library/svelte';
import { vi } from 'vitest';

// What a page has and jsdom lacks.
vi.stubGlobal(
  'ResizeObserver',
  class {
    observe() {}
    unobserve() {}
    disconnect() {}
  },
);
vi.stubGlobal('matchMedia', (query: string) => ({ matches: false, media: query }));

// Everything is as large as a window of 1280 by 800 makes the drawings.
Element.prototype.getBoundingClientRect = () => new DOMRect(0, 0, 760, 330);

// Room for a busy machine; nothing is asserted about speed here.
configure({ asyncUtilTimeout: 20_000 });
