import { expect, test } from 'vitest';
import { formula, picture } from './picture';

const room = () => document.createElement('div');

test('a picture is put in without script, handlers or style', () => {
  const holder = room();
  picture(
    '<svg xmlns="http://www.w3.org/2000/svg" onload="x()"><script>x()</script><circle r="2" style="fill:red" class="fill-ink"/></svg>',
  )(holder);
  expect(holder.innerHTML).toBe(
    '<svg xmlns="http://www.w3.org/2000/svg"><circle r="2" class="fill-ink"></circle></svg>',
  );
});

test('what is no picture leaves the room empty', () => {
  const holder = room();
  picture('<p>no</p>')(holder);
  expect(holder.childElementCount).toBe(0);
  formula('<svg xmlns="http://www.w3.org/2000/svg"/>')(holder);
  expect(holder.childElementCount).toBe(0);
});
