import { expect, test } from 'vitest';
import { Latest } from './latest';

/** Answers by hand, in the order asked. */
function slow() {
  const open: { question: number; answer: (text: string) => void; fail: (error: Error) => void }[] =
    [];
  const ask = (question: number) =>
    new Promise<string>((answer, fail) => {
      open.push({ question, answer, fail });
    });
  return { open, ask };
}
const settled = () => new Promise((resolve) => setTimeout(resolve));

test('what came between the running question and the newest one is left out', async () => {
  const { open, ask } = slow();
  const told: string[] = [];
  const latest = new Latest(
    ask,
    (answer) => told.push(answer),
    () => told.push('failed'),
  );
  for (const question of [1, 2, 3, 4]) latest.request(question);
  expect(open.map(({ question }) => question)).toEqual([1]);
  open[0]?.answer('one');
  await settled();
  expect(open.map(({ question }) => question)).toEqual([1, 4]);
  open[1]?.answer('four');
  await settled();
  expect(told).toEqual(['one', 'four']);
});

test('a failure is told and the next question is asked all the same', async () => {
  const { open, ask } = slow();
  const told: string[] = [];
  const latest = new Latest(
    ask,
    (answer) => told.push(answer),
    (error) => told.push(String(error)),
  );
  latest.request(1);
  latest.request(2);
  open[0]?.fail(new Error('locked'));
  await settled();
  open[1]?.answer('two');
  await settled();
  expect(told).toEqual(['Error: locked', 'two']);
});
