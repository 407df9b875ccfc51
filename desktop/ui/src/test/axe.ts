import axe from 'axe-core';
import { expect } from 'vitest';

/** No finding of axe; colours are left to the check of contrast, because jsdom does not paint. */
export async function expectAccessible(root: Element): Promise<void> {
  const { violations } = await axe.run(root, {
    rules: { 'color-contrast': { enabled: false } },
    resultTypes: ['violations'],
  });
  const found = violations.map(
    ({ id, help, nodes }) =>
      `${id}: ${help}\n  ${nodes.map((node) => node.html.slice(0, 200)).join('\n  ')}`,
  );
  expect(found).toEqual([]);
}
