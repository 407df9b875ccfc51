import { fireEvent, render, screen, waitFor, within } from '@testing-library/svelte';
import { beforeEach, expect, test, vi } from 'vitest';
import App from './App.svelte';
import { BackendError, type Backend } from './backend/backend';
import { VIEWS } from './features/session/session.svelte';
import { expectAccessible } from './test/axe';
import { backendWith } from './test/fixtures';

beforeEach(() => {
  localStorage.clear();
  history.replaceState(null, '', '#/section');
});

async function open(replaced: Partial<Backend> = {}, view = 'section') {
  history.replaceState(null, '', `#/${view}`);
  const backend = await backendWith(replaced);
  const { container } = render(App, { backend });
  await waitFor(() => expect(screen.getByText('Brackmoor Terminal, tank T-7')).toBeTruthy());
  return { backend, container };
}
const failing = (message: string) => () =>
  Promise.reject(new BackendError({ code: 'store-locked', message }));

test.each(VIEWS.map(([view]) => view))('%s comes up and axe finds nothing', async (view) => {
  const { container } = await open({}, view);
  await waitFor(() =>
    expect(
      within(screen.getByRole('main'))
        .queryAllByRole('status')
        .filter((one) => one.textContent?.endsWith('…')),
    ).toEqual([]),
  );
  await new Promise((resolve) => setTimeout(resolve, 50));
  await expectAccessible(container);
});

test.each(VIEWS.map(([view]) => view))('%s asks nothing more once it is there', async (view) => {
  let asked = 0;
  const backend = await backendWith();
  const counting = new Proxy(backend, {
    get(target, name) {
      const found: unknown = Reflect.get(target, name);
      if (typeof found !== 'function') return found;
      return (...given: unknown[]) => {
        asked += 1;
        return Reflect.apply(found, target, given) as unknown;
      };
    },
  });
  history.replaceState(null, '', `#/${view}`);
  render(App, { backend: counting });
  await screen.findByText('Brackmoor Terminal, tank T-7');
  const rest = () => new Promise((resolve) => setTimeout(resolve, 1500));
  await rest();
  const before = asked;
  expect(before).toBeGreaterThan(2);
  await rest();
  expect(asked).toBe(before);
});

test('the window opens at the most pressing instrument, with the caution beside the verdict', async () => {
  await open();
  const panel = await screen.findByRole('region', { name: 'Chosen instrument' });
  const chosen = screen.getAllByRole('option', { selected: true });
  expect(chosen).toHaveLength(1);
  expect(within(panel).getByText(/Watch|Review|Stop/, { selector: 'strong.trigger' })).toBeTruthy();
  expect(within(panel).getByText(/responsible licensed engineer decides/)).toBeTruthy();
});

test('every instrument of the site can be reached on the section', async () => {
  await open();
  await waitFor(() => expect(screen.getAllByRole('option')).toHaveLength(52));
});

test('arrows walk over the section and the panel follows', async () => {
  await open();
  await waitFor(() => expect(screen.getAllByRole('option')).toHaveLength(52));
  const before = screen.getByRole('option', { selected: true });
  before.focus();
  await fireEvent.keyDown(before, { key: 'ArrowLeft' });
  const after = screen.getByRole('option', { selected: true });
  expect(after.dataset['id']).not.toBe(before.dataset['id']);
  expect(document.activeElement).toBe(after);
  const panel = screen.getByRole('region', { name: 'Chosen instrument' });
  expect(
    within(panel).getByRole('heading', { name: new RegExp(`^${after.dataset['id'] ?? ''} `) }),
  ).toBeTruthy();
});

test('one click changes every unit, and the choice is kept', async () => {
  const { backend } = await open();
  const moment = vi.spyOn(backend, 'moment');
  await screen.findByText(/^10\.9\d m$/, { selector: 'dd' });
  await fireEvent.click(screen.getByRole('button', { name: /^Units/ }));
  await screen.findByText(/^35\.\d+ ft$/, { selector: 'dd' });
  expect(moment.mock.calls.at(-1)?.[1]).toBe('us_customary');
  await waitFor(() =>
    expect(screen.getByRole('region', { name: 'Chosen instrument' }).textContent).not.toMatch(
      /kPa| mm/,
    ),
  );
  expect(localStorage.getItem('units')).toBe('us_customary');
});

test('colours go round light, dark, sunlight; in full sun contours are off', async () => {
  await open();
  const button = await screen.findByRole('button', { name: /^Colours/ });
  await screen.findByRole('radio', { name: 'excess pore pressure', checked: true });
  await fireEvent.click(button);
  expect(document.documentElement.dataset['theme']).toBe('dark');
  await fireEvent.click(button);
  expect(document.documentElement.dataset['theme']).toBe('sunlight');
  expect(screen.getByRole('radio', { name: 'no contours', checked: true })).toBeTruthy();
});

test('? shows the keys, digits change the view, and a field keeps its letters', async () => {
  await open();
  await fireEvent.keyDown(window, { key: '?' });
  expect(screen.getByRole('dialog', { name: 'Keys' })).toBeTruthy();
  await fireEvent.click(screen.getByRole('button', { name: 'Close' }));
  await fireEvent.keyDown(window, { key: '4' });
  const search = await screen.findByRole('searchbox');
  await fireEvent.keyDown(search, { key: '1' });
  expect(screen.getByRole('heading', { name: 'Instruments' })).toBeTruthy();
});

test('single keys can be switched off', async () => {
  await open();
  await fireEvent.keyDown(window, { key: '?' });
  await fireEvent.click(screen.getByRole('checkbox', { name: /Single keys/ }));
  await fireEvent.click(screen.getByRole('button', { name: 'Close' }));
  await fireEvent.keyDown(window, { key: '4' });
  expect(screen.queryByRole('heading', { name: 'Instruments' })).toBeNull();
});

test('when nothing opens, the window says so and tries again', async () => {
  const openDemo = vi.fn(failing('Another program has the store. Close it.'));
  render(App, { backend: await backendWith({ openDemo }) });
  const trouble = await screen.findByRole('alert');
  expect(trouble.textContent).toContain('The store is in use');
  expect(trouble.textContent).toContain('Close it.');
  await fireEvent.click(within(trouble).getByRole('button', { name: 'Try again' }));
  expect(openDemo).toHaveBeenCalledTimes(2);
});

test('long work shows how far it is and can be cancelled', async () => {
  let tell: (step: { what: string; done: number }) => void = () => undefined;
  let fail: (error: BackendError) => void = () => undefined;
  const cancelWork = vi.fn(() => {
    fail(new BackendError({ code: 'cancelled', message: 'Cancelled. Nothing was changed.' }));
    return Promise.resolve();
  });
  render(App, {
    backend: await backendWith({
      followWork: (follow) => {
        tell = follow;
        return Promise.resolve();
      },
      openDemo: () =>
        new Promise((_, reject) => {
          fail = reject;
        }),
      cancelWork,
    }),
  });
  await screen.findByText('Opening the site …');
  await new Promise((resolve) => setTimeout(resolve));
  tell({ what: 'Comparing readings with what is expected', done: 0.4 });
  await screen.findByText('Comparing readings with what is expected …');
  expect(screen.getByRole<HTMLProgressElement>('progressbar').value).toBe(0.4);
  await fireEvent.click(screen.getByRole('button', { name: 'Cancel' }));
  expect((await screen.findByRole('alert')).textContent).toContain('Nothing was changed.');
  expect(screen.queryByRole('progressbar')).toBeNull();
});

test('a checked text becomes a new site in a file of its own', async () => {
  const newStore = vi.fn<Backend['newStore']>(() => Promise.resolve(null));
  await open({ newStore }, 'site');
  const start = await screen.findByRole<HTMLButtonElement>('button', { name: 'New site …' });
  await waitFor(() => {
    expect(start.disabled).toBe(false);
  });
  await fireEvent.click(start);
  const dialog = screen.getByRole('dialog', { name: 'New site' });
  await fireEvent.input(within(dialog).getByLabelText('Reason'), { target: { value: 'Tank 9.' } });
  await fireEvent.input(within(dialog).getByLabelText('Your name'), {
    target: { value: 'Ole Tamm' },
  });
  await fireEvent.click(within(dialog).getByRole('button', { name: /Choose the file/ }));
  expect(newStore.mock.calls[0]?.[1]).toEqual({ who: 'Ole Tamm', why: 'Tank 9.' });
  expect(screen.getByRole('dialog', { name: 'New site' })).toBeTruthy();
});

test('what keeps the readings from being compared stands over every view', async () => {
  const { openDemo } = await backendWith();
  const note = 'No reading of a level gauge: the load is unknown. Import one.';
  await open({ openDemo: async (run) => ({ ...(await openDemo(run)), note }) }, 'log');
  expect((await screen.findByRole('alert')).textContent).toBe(note);
});

test('one failing drawing leaves the others on the page', async () => {
  await open({ fillLine: failing('The disk is away.') });
  const trouble = await screen.findByRole('alert');
  expect(trouble.textContent).toContain('The disk is away.');
  expect(await screen.findByRole('listbox', { name: 'Instruments on the section' })).toBeTruthy();
});

test.each([
  ['log', 'log'],
  ['limits', 'limits'],
  ['faults', 'faults'],
  ['siteText', 'site'],
  ['working', 'working'],
] as const)('a failing %s stands as a message in its view', async (command, view) => {
  await open({ [command]: failing('Locked. Try later.') }, view);
  const trouble = await screen.findByRole('alert');
  expect(trouble.textContent).toContain('Locked. Try later.');
});

test('a decision needs a choice, a reason and a name, and carries the moment of the cursor', async () => {
  const decide = vi.fn<Backend['decide']>(() =>
    Promise.resolve({ entries: [], chain: '', chain_whole: true }),
  );
  const { backend } = await open({ decide });
  const last = (await backend.openDemo(null)).last_ms;
  await fireEvent.click(await screen.findByRole('button', { name: 'Decide' }));
  const dialog = screen.getByRole('dialog', { name: 'Decision' });
  const sign = within(dialog).getByRole<HTMLButtonElement>('button', { name: 'Sign the decision' });
  expect(sign.disabled).toBe(true);
  await fireEvent.click(within(dialog).getByRole('radio', { name: /Hold/ }));
  await fireEvent.input(within(dialog).getByLabelText('Reason'), {
    target: { value: 'East edge yields.' },
  });
  expect(sign.disabled).toBe(true);
  await fireEvent.input(within(dialog).getByLabelText('Signed by'), {
    target: { value: 'Dr. Hedda Voss' },
  });
  await fireEvent.click(sign);
  expect(decide).toHaveBeenCalledExactlyOnceWith(
    'hold',
    last,
    { who: 'Dr. Hedda Voss', why: 'East edge yields.' },
    'si',
  );
  await waitFor(() => expect(screen.queryByRole('dialog')).toBeNull());
});

test('a refused decision stays in its form with the reason', async () => {
  await open({
    decide: () =>
      Promise.reject(new BackendError({ code: 'refused', message: 'The name is too long.' })),
  });
  await fireEvent.click(await screen.findByRole('button', { name: 'Decide' }));
  const dialog = screen.getByRole('dialog', { name: 'Decision' });
  await fireEvent.click(within(dialog).getByRole('radio', { name: /Continue/ }));
  await fireEvent.input(within(dialog).getByLabelText('Reason'), { target: { value: 'x' } });
  await fireEvent.input(within(dialog).getByLabelText('Signed by'), { target: { value: 'y' } });
  await fireEvent.click(within(dialog).getByRole('button', { name: 'Sign the decision' }));
  expect((await within(dialog).findByRole('alert')).textContent).toContain('The name is too long.');
});

test('new limits need two different approvers', async () => {
  const proposeLimits = vi.fn<Backend['proposeLimits']>(() =>
    Promise.reject(new BackendError({ code: 'two-approvers', message: 'Two.' })),
  );
  await open({ proposeLimits }, 'limits');
  const enter = await screen.findByRole<HTMLButtonElement>('button', {
    name: 'Enter this version',
  });
  const write = (label: RegExp | string, value: string) =>
    fireEvent.input(screen.getByLabelText(label), { target: { value } });
  await write(/^Count from/, '2026-05-24T06:00');
  await write('Reason', 'Rates of rise 6.');
  await write(/^First approver/, 'Hedda Voss');
  await write('Second approver', 'hedda voss');
  expect(enter.disabled).toBe(true);
  expect(screen.getByText(/another person/)).toBeTruthy();
  await write('Second approver', 'Ansis Brack');
  expect(enter.disabled).toBe(false);
  await fireEvent.click(enter);
  expect(proposeLimits.mock.calls[0]?.[0]).toMatchObject({
    approvers: ['Hedda Voss', 'Ansis Brack'],
    effective: '2026-05-24 06:00',
    loosens: false,
  });
  expect((await screen.findByRole('alert')).textContent).toContain('A second person must approve');
});

test('suspicions must be looked at before readings are taken in, and a corrected unit is previewed anew', async () => {
  const { backend } = await open({}, 'import');
  const preview = vi.spyOn(backend, 'importPreview');
  await fireEvent.click(await screen.findByRole('button', { name: /Choose files/ }));
  const take = await screen.findByRole<HTMLButtonElement>('button', { name: /^Take in/ });
  await fireEvent.input(screen.getByLabelText('Your name'), { target: { value: 'Ole Tamm' } });
  await fireEvent.input(screen.getByLabelText('Reason'), { target: { value: 'round' } });
  expect(take.disabled).toBe(true);
  await fireEvent.click(screen.getByRole('checkbox', { name: /looked at what looks wrong/ }));
  expect(take.disabled).toBe(false);
  await fireEvent.change(screen.getByLabelText('Unit of column PE 2'), {
    target: { value: 'psi' },
  });
  expect(preview.mock.calls.at(-1)?.[1]).toEqual([
    { file: 'east-hand-readings.csv', header: 'PE 2', instrument: 'PE2', unit: 'psi' },
  ]);
});

test('a broken site file lists its problem by line and cannot be saved', async () => {
  await open({}, 'site');
  const text = await screen.findByRole<HTMLTextAreaElement>('textbox', { name: 'Site file' });
  await fireEvent.input(text, { target: { value: '{\n  "format": \n}' } });
  await screen.findByRole('button', { name: 'line 3' });
  expect(screen.getByRole<HTMLButtonElement>('button', { name: /^Save/ }).disabled).toBe(true);
  await fireEvent.click(screen.getByRole('button', { name: 'Undo' }));
  expect(text.value).toContain('brimstead-site/1');
});
