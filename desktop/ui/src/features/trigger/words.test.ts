import { expect, test } from 'vitest';
import { instrument } from '../../test/fixtures';
import { inOneLine, mostPressing, phrase } from './words';

test('the word says what is doubtful about it', () => {
  expect(phrase(instrument({ trigger: 'review', confirmed: false }))).toBe('Review, unconfirmed');
  expect(phrase(instrument({ trigger: 'stop', held: true, fault: 'frozen' }))).toBe('Stop, held');
  expect(phrase(instrument({ not_judged: true }))).toBe('Not judged');
});

test('a failed instrument is never called Normal', () => {
  expect(phrase(instrument({ trigger: 'normal', fault: 'flat since 8 April' }))).toBe('No verdict');
});

test('the most pressing is the highest trigger, then the furthest out of its band', () => {
  const all = [
    instrument({ id: 'A', band_position: 9 }),
    instrument({ id: 'B', trigger: 'review', band_position: 2 }),
    instrument({ id: 'C', trigger: 'review', band_position: -3 }),
  ];
  expect(mostPressing(all)?.id).toBe('C');
  expect(mostPressing([])).toBeUndefined();
});

test('one line holds reading, age and band', () => {
  expect(inOneLine(instrument())).toBe(
    'PE1 piezometer, east edge, 4 m deep, soft organic clay: Normal, 80.3 kPa, 8 min old, expected 63.5 kPa to 79.4 kPa',
  );
  expect(
    inOneLine(
      instrument({ reading: null, band_low: null, fault: 'no signal', data_state: 'failed' }),
    ),
  ).toContain('no reading yet. Equipment fault: failed');
});
