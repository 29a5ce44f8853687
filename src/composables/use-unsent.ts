import { computed, type MaybeRefOrGetter, onScopeDispose, ref, toValue } from 'vue';
import { ApiProblem, fieldErrors } from '../api/problem.ts';

/** Something entered that has not reached the server yet, or that the server refused. */
export interface Unsent<Body> {
  /** Made on this device; the server adds one key once, however often it is sent. */
  entryKey: string;
  siteId: number;
  body: Body;
  /** What it is, for a list: "KX-09, 1482,5 °C". */
  words: string;
  writtenAt: string;
  /** What the server said against it, beside the fields it concerns. Null: not sent yet. */
  refusal: { says: string; fields: Record<string, string> } | null;
}

/** A key that no other entry has, also on a page without TLS, where the browser makes none (RFC 9562, version 4). */
export function newEntryKey(): string {
  const bytes = crypto.getRandomValues(new Uint8Array(16));
  bytes[6] = (bytes[6]! & 0x0f) | 0x40;
  bytes[8] = (bytes[8]! & 0x3f) | 0x80;
  const text = [...bytes].map((byte) => byte.toString(16).padStart(2, '0')).join('');
  return text.replace(/^(.{8})(.{4})(.{4})(.{4})(.{12})$/, '$1-$2-$3-$4-$5');
}

const keyOf = (personId: number) => `cupel.unsent.${personId}`;

function readKept<Body>(personId: number): Unsent<Body>[] {
  try {
    const found: unknown = JSON.parse(localStorage.getItem(keyOf(personId)) ?? '[]');
    return Array.isArray(found) ? (found as Unsent<Body>[]) : [];
  } catch {
    return [];
  }
}

/**
 * Keeps on this device what a person enters until the server has it: through lost networks, reloads and other people who
 * sign in on the same device. Sent one by one, again by itself once the network is back; what the server refuses stays
 * until the person mends or discards it.
 * @param personId whose entries; those of others stay untouched
 * @param deliver sends one entry; rejects with an ApiProblem
 */
export function useUnsent<Body>(
  personId: MaybeRefOrGetter<number>,
  deliver: (entry: Unsent<Body>) => Promise<void>,
) {
  const kept = ref<Unsent<Body>[]>(readKept(toValue(personId))) as { value: Unsent<Body>[] };
  const sending = ref(false);
  /** The browser refused to store; what is entered then lives no longer than this page. */
  const unkept = ref(false);
  const waiting = computed(() => kept.value.filter(({ refusal }) => refusal === null));

  /** Another page of this browser may have sent or added some meanwhile. */
  function reread() {
    if (!unkept.value) kept.value = readKept(toValue(personId));
  }
  function change(next: (before: Unsent<Body>[]) => Unsent<Body>[]) {
    reread();
    kept.value = next(kept.value);
    try {
      localStorage.setItem(keyOf(toValue(personId)), JSON.stringify(kept.value));
      unkept.value = false;
    } catch {
      unkept.value = true;
    }
  }
  const discard = (entryKey: string) => change((before) => before.filter((one) => one.entryKey !== entryKey));

  /** False where there is no point in trying the next one now. */
  async function sendOne(entry: Unsent<Body>): Promise<boolean> {
    try {
      await deliver(entry);
      discard(entry.entryKey);
      return true;
    } catch (error) {
      if (!(error instanceof ApiProblem)) throw error;
      const theirs =
        error.status >= 400 && error.status < 500 && error.status !== 401 && error.status !== 429;
      if (!theirs) return false;
      const refusal = { says: error.message, fields: fieldErrors(error) };
      change((before) => before.map((one) => (one.entryKey === entry.entryKey ? { ...one, refusal } : one)));
      return true;
    }
  }

  let wantedAgain = false;
  async function sendAll(): Promise<void> {
    wantedAgain = true;
    if (sending.value) return;
    sending.value = true;
    try {
      while (wantedAgain) {
        wantedAgain = false;
        reread();
        for (let next = waiting.value[0]; next; next = waiting.value[0]) {
          if (!(await sendOne(next))) break;
        }
      }
    } finally {
      sending.value = false;
    }
  }

  function add(entry: Omit<Unsent<Body>, 'refusal' | 'writtenAt'>): Promise<void> {
    const added = { ...entry, writtenAt: new Date().toISOString(), refusal: null };
    change((before) => [...before.filter((one) => one.entryKey !== entry.entryKey), added]);
    return sendAll();
  }

  const again = () => void sendAll();
  window.addEventListener('online', again);
  window.addEventListener('storage', reread);
  const timer = window.setInterval(() => waiting.value.length > 0 && again(), 20_000);
  onScopeDispose(() => {
    window.removeEventListener('online', again);
    window.removeEventListener('storage', reread);
    window.clearInterval(timer);
  });
  if (waiting.value.length > 0) again();

  return { kept: computed(() => kept.value), waiting, sending, unkept, add, discard, sendAll };
}
