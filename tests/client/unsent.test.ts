import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest';
import { effectScope, type EffectScope } from 'vue';
import { ApiProblem } from '../../src/api/problem.ts';
import { newEntryKey, type Unsent, useUnsent } from '../../src/composables/use-unsent.ts';

type Body = { value: string };
let scopes: EffectScope[] = [];
/** What the server of a test does with an entry. */
let answer: (entry: Unsent<Body>) => Promise<void>;
let sent: string[];

beforeEach(() => {
  localStorage.clear();
  sent = [];
  answer = async () => {};
});
afterEach(() => {
  vi.unstubAllGlobals();
  for (const scope of scopes) scope.stop();
  scopes = [];
});

/** The page as a person opens it. */
function open(personId: number) {
  const scope = effectScope();
  scopes.push(scope);
  return scope.run(() =>
    useUnsent<Body>(personId, async (entry) => {
      sent.push(entry.body.value);
      await answer(entry);
    }),
  )!;
}
const entry = (value: string, entryKey = newEntryKey()) => ({
  entryKey,
  siteId: 1,
  body: { value },
  words: `KX-09: ${value} °C`,
});
const offline = () => Promise.reject(ApiProblem.offline());
const refused = (status: number, path = 'value') =>
  Promise.reject(
    new ApiProblem({
      type: '/problems/invalid-input',
      title: 'Not valid',
      status,
      detail: 'One field is wrong.',
      code: 'invalid-input',
      fields: [{ path, message: 'Write a number.' }],
    }),
  );
const words = ({ kept }: ReturnType<typeof open>) => kept.value.map((one) => one.words);

describe('what is entered', () => {
  test('is sent at once and kept no longer', async () => {
    const page = open(1);
    await page.add(entry('1482,5'));
    expect([sent, words(page)]).toEqual([['1482,5'], []]);
  });

  test('stays on the device while the network is away, also over a reload, and is sent in order once it is back', async () => {
    answer = offline;
    const page = open(1);
    await page.add(entry('1'));
    await page.add(entry('2'));
    expect(words(page)).toEqual(['KX-09: 1 °C', 'KX-09: 2 °C']);
    scopes.pop()!.stop();
    const later = open(1);
    await later.sendAll();
    expect(words(later)).toHaveLength(2);
    answer = async () => {};
    sent = [];
    window.dispatchEvent(new Event('online'));
    await expect.poll(() => words(later)).toEqual([]);
    expect(sent).toEqual(['1', '2']);
  });

  test('is sent by itself when the page is opened again', async () => {
    answer = offline;
    await open(1).add(entry('1'));
    scopes.pop()!.stop();
    answer = async () => {};
    const page = open(1);
    await expect.poll(() => words(page)).toEqual([]);
  });

  test('waits where the server fails or the person has to sign in again', async () => {
    for (const status of [500, 503, 401, 429]) {
      localStorage.clear();
      answer = () => refused(status);
      const page = open(1);
      await page.add(entry('1'));
      expect(page.kept.value.map(({ refusal }) => refusal)).toEqual([null]);
    }
  });

  test('waits behind nothing that the server refuses, which stays with what was said', async () => {
    answer = ({ body }) => (body.value === 'x' ? refused(400) : Promise.resolve());
    const page = open(1);
    await page.add(entry('x', 'key'));
    await page.add(entry('2'));
    expect(sent).toEqual(['x', '2']);
    expect(page.kept.value).toMatchObject([
      { refusal: { says: 'One field is wrong.', fields: { value: 'Write a number.' } } },
    ]);
    await page.sendAll();
    expect(sent).toEqual(['x', '2']);
    await page.add(entry('3', 'key'));
    expect([sent, words(page)]).toEqual([['x', '2', '3'], []]);
  });

  test('is discarded by the person alone', async () => {
    answer = () => refused(400);
    const page = open(1);
    await page.add(entry('x', 'key'));
    page.discard('key');
    expect(words(open(1))).toEqual([]);
  });

  test('is not sent for another person who signs in on the same device, and is not lost by it', async () => {
    answer = offline;
    await open(1).add(entry('1'));
    answer = async () => {};
    scopes.pop()!.stop();
    sent = [];
    const other = open(2);
    await other.sendAll();
    await other.add(entry('7'));
    expect([sent, words(other)]).toEqual([['7'], []]);
    scopes.pop()!.stop();
    const own = open(1);
    await expect.poll(() => sent).toEqual(['7', '1']);
    expect(words(own)).toEqual([]);
  });

  test('is taken over from another page of the browser', async () => {
    answer = offline;
    const [one, two] = [open(1), open(1)];
    await one.add(entry('1'));
    await two.add(entry('2'));
    await one.sendAll();
    expect(words(one)).toEqual(['KX-09: 1 °C', 'KX-09: 2 °C']);
  });

  test('is sent all the same where the browser keeps nothing, and the page says so', async () => {
    const real = localStorage;
    vi.stubGlobal('localStorage', {
      getItem: (key: string) => real.getItem(key),
      setItem() {
        throw new DOMException('full', 'QuotaExceededError');
      },
    });
    answer = offline;
    const page = open(1);
    await page.add(entry('1'));
    expect([page.unkept.value, words(page)]).toEqual([true, ['KX-09: 1 °C']]);
    answer = async () => {};
    await page.sendAll();
    expect(words(page)).toEqual([]);
  });

  test('starts afresh where the memory holds something else', () => {
    for (const stored of ['not json', '{"a":1}', 'null']) {
      localStorage.setItem('cupel.unsent.1', stored);
      expect(words(open(1))).toEqual([]);
    }
  });
});

test('a key made on the device is one of version 4 (RFC 9562) and no two are alike', () => {
  const keys = Array.from({ length: 200 }, newEntryKey);
  for (const key of keys)
    expect(key).toMatch(/^[0-9a-f]{8}-[0-9a-f]{4}-4[0-9a-f]{3}-[89ab][0-9a-f]{3}-[0-9a-f]{12}$/);
  expect(new Set(keys).size).toBe(200);
});
