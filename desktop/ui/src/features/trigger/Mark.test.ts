import { render } from '@testing-library/svelte';
import { expect, test } from 'vitest';
import Mark from './Mark.svelte';

/** Height of the lowest and the highest point of the filled part, in radii; null when nothing is filled. */
function fill(container: Element): string | null {
  const level = container.querySelector('.level');
  if (!level) return null;
  return level.localName === 'circle' ? 'full' : (level.getAttribute('d') ?? '');
}
const draw = (props: Parameters<typeof render<typeof Mark>>[1]) => {
  const { container } = render(Mark, props);
  return container;
};

test('the ring is empty at Normal and full at Stop', () => {
  expect(fill(draw({ trigger: 'normal', radius: 7 }))).toBeNull();
  expect(fill(draw({ trigger: 'stop', radius: 7 }))).toBe('full');
});

test('a third is filled at Watch and two thirds at Review: chords at a third below and above the middle', () => {
  // Small arc below the chord at y = +2 of a circle of radius 6, large arc below the chord at y = -2.
  expect(fill(draw({ trigger: 'watch', radius: 7 }))).toMatch(
    /^M-5\.65\d* 2A6 6 0 0 0 5\.65\d* 2Z$/,
  );
  expect(fill(draw({ trigger: 'review', radius: 7 }))).toMatch(
    /^M-5\.65\d* -2A6 6 0 1 0 5\.65\d* -2Z$/,
  );
});

test('the outline is dotted while unconfirmed, and only then', () => {
  expect(
    draw({ trigger: 'review', confirmed: false }).querySelector('[data-dotted]'),
  ).not.toBeNull();
  expect(draw({ trigger: 'review', confirmed: true }).querySelector('[data-dotted]')).toBeNull();
  expect(draw({ trigger: 'normal', confirmed: false }).querySelector('[data-dotted]')).toBeNull();
});

test('an equipment fault is a dashed square with a stroke and no ring', () => {
  const container = draw({ trigger: 'normal', fault: true });
  expect(container.querySelector('[data-mark="fault"] rect[stroke-dasharray]')).not.toBeNull();
  expect(container.querySelector('path.square')).not.toBeNull();
  expect(container.querySelector('.ring')).toBeNull();
});

test('a trigger that is held over a fault does not disappear behind it', () => {
  const container = draw({ trigger: 'stop', fault: true, held: true });
  expect(fill(container)).toBe('full');
  expect(container.querySelector('rect.square')).not.toBeNull();
});

test('without a verdict the square has no stroke', () => {
  const container = draw({ trigger: 'normal', notJudged: true });
  expect(container.querySelector('rect.no-verdict')).not.toBeNull();
  expect(container.querySelector('path.square')).toBeNull();
});
