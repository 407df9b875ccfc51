import { expect, test } from 'vitest';
import { corrected } from './corrections';

const column = {
  header: 'PE 2',
  instrument: 'PE2',
  unit: 'kPa',
  units: ['kPa', 'psi'],
  note: null,
};

test('a correction keeps what it does not change, and the newest counts', () => {
  const unit = corrected([], 'hand.csv', column, { unit: 'psi' });
  expect(unit).toEqual([{ file: 'hand.csv', header: 'PE 2', instrument: 'PE2', unit: 'psi' }]);
  const both = corrected(unit, 'hand.csv', column, { instrument: null });
  expect(both).toEqual([{ file: 'hand.csv', header: 'PE 2', instrument: null, unit: 'psi' }]);
  expect(corrected(both, 'other.csv', column, { unit: 'kPa' })).toHaveLength(2);
});
