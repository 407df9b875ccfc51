import { expect, test } from 'vitest';
import { instrument } from '../../test/fixtures';
import { found, sorted } from './order';

const all = [
  instrument({ id: 'PE10', trigger: 'watch' }),
  instrument({ id: 'PE2', trigger: 'stop', place: 'west edge' }),
  instrument({ id: 'PE1', reading: null }),
];

test('names with numbers sort as people count', () => {
  expect(sorted(all, 'id', false).map(({ id }) => id)).toEqual(['PE1', 'PE2', 'PE10']);
});

test('by trigger, the highest first', () => {
  expect(sorted(all, 'trigger', true).map(({ id }) => id)).toEqual(['PE2', 'PE10', 'PE1']);
});

test('one without a reading comes last from the highest down', () => {
  expect(sorted(all, 'reading', true).at(-1)?.id).toBe('PE1');
});

test('every word of the search must be found', () => {
  expect(found(all, 'west stop').map(({ id }) => id)).toEqual(['PE2']);
  expect(found(all, '  ')).toHaveLength(3);
  expect(found(all, 'north')).toEqual([]);
});
