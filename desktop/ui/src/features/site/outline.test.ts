import { expect, test } from 'vitest';
import { outline } from './outline';

test('only the outermost keys count, whatever stands in texts', () => {
  const text =
    '{\n  "site": {"name": "a } {"},\n  "layers": [\n    {"name": "\\"clay\\": soft"}\n  ],\n  "tanks": []\n}';
  expect(outline(text)).toEqual([
    { name: 'site', line: 2 },
    { name: 'layers', line: 3 },
    { name: 'tanks', line: 6 },
  ]);
});

test('a text that breaks off shows what is there', () => {
  expect(outline('{\n  "site": {\n    "name": "x').map(({ name }) => name)).toEqual(['site']);
});
