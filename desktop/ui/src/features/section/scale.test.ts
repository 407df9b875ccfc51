import { expect, test } from 'vitest';
import { instrument } from '../../test/fixtures';
import type { SectionView } from '../../backend/backend';
import { planFrame, planPoints } from './plan';
import { fit, neighbour, onSection } from './scale';

const section: SectionView = {
  title: 'west to east through T-7',
  extent_m: [-75, 40, -18, 26],
  layers: [{ name: 'Soft clay', top_m: 0, base_m: 26, drained: false }],
  water_table_m: 1,
  drains: null,
  tanks: [
    {
      name: 'T-7',
      under_test: true,
      x_m: 0,
      diameter_m: 50,
      shell_height_m: 15.6,
      liquid_level_m: null,
      label: 'T-7',
    },
    {
      name: 'T-6',
      under_test: false,
      x_m: -82,
      diameter_m: 46,
      shell_height_m: 14.4,
      liquid_level_m: 11,
      label: 'T-6',
    },
  ],
};

test.each([
  [764, 330],
  [1250, 420],
  [400, 900],
])(
  'lengths and heights have one scale in %i by %i px, and all of the extent is seen',
  (width, height) => {
    const scale = fit(section, width, height);
    expect(scale.x(10) - scale.x(0)).toBeCloseTo(scale.y(10) - scale.y(0), 9);
    for (const [px, size] of [
      [scale.x(-75), width],
      [scale.x(40), width],
      [scale.y(-18), height],
      [scale.y(26), height],
    ] as const) {
      expect(px).toBeGreaterThanOrEqual(-1e-9);
      expect(px).toBeLessThanOrEqual(size + 1e-9);
    }
  },
);

test('enlarged, the point looked at is in the picture and nothing beyond the section is', () => {
  const scale = fit(section, 764, 330, { zoom: 4, x_m: 38, depth_m: 4 });
  expect(scale.px_per_m).toBeCloseTo(4 * fit(section, 764, 330).px_per_m, 9);
  expect(scale.seen.right).toBeCloseTo(40, 9);
  expect(scale.x(38)).toBeLessThan(764);
  expect(scale.y(4)).toBeCloseTo(165, 9);
});

test('instruments near the plane stand on the section, the others on the plan at their bearing', () => {
  const scale = fit(section, 764, 330);
  const frame = planFrame(section, scale, 764);
  if (!frame) throw new Error('there is room for a plan between the tanks');
  const near = instrument({ id: 'PF1', off_section_m: 8.99 });
  const north = instrument({ id: 'SV01', section_x_m: 0, off_section_m: 25.3 });
  const far = instrument({ id: 'PB1', section_x_m: 0, off_section_m: 130 });
  const south = instrument({ id: 'SV09', section_x_m: 0, off_section_m: -25.3 });
  expect(onSection(near, section)).toBe(true);
  const points = planPoints([near, north, far, south], section, frame);
  expect(points.map(({ id }) => id).sort()).toEqual(['PB1', 'SV01', 'SV09']);
  const y = (id: string) => points.find((point) => point.id === id)?.y ?? NaN;
  expect(y('PB1')).toBeLessThan(y('SV01'));
  expect(y('SV01')).toBeLessThan(y('SV09'));
  for (const { x, y: at } of points) {
    expect(x).toBeGreaterThan(frame.x);
    expect(x).toBeLessThan(frame.x + frame.width);
    expect(at).toBeGreaterThan(frame.y);
    expect(at).toBeLessThan(frame.y + frame.height);
  }
});

test('a picture without sky has no plan', () => {
  expect(planFrame(section, fit(section, 300, 120), 300)).toBeNull();
});

test('arrows lead to the nearest instrument that way', () => {
  const points = [
    { id: 'PE1', x: 100, y: 100 },
    { id: 'PE2', x: 102, y: 150 },
    { id: 'PM1', x: 40, y: 100 },
    { id: 'PO1', x: 170, y: 108 },
  ];
  expect(neighbour(points, 'PE1', 'ArrowDown')).toBe('PE2');
  expect(neighbour(points, 'PE1', 'ArrowLeft')).toBe('PM1');
  expect(neighbour(points, 'PE1', 'ArrowRight')).toBe('PO1');
  expect(neighbour(points, 'PE1', 'ArrowUp')).toBeNull();
  expect(neighbour(points, 'PE1', 'Enter')).toBeNull();
});
