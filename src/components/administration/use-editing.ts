import { computed, ref, shallowRef, type Ref } from 'vue';
import { ApiProblem, fieldErrors, sayError } from '../../api/problem.ts';
import { mergeVersions, takeSides } from './merge-versions.ts';

interface Versioned {
  version: number;
}
export interface Conflict<F> {
  /** Fields that both changed, to different values. */
  both: string[];
  merged: F;
  theirs: F;
  version: number;
  savedBy: string | null;
  savedAt: string | null;
}
interface Editing<F extends object, Row extends Versioned> {
  /** What is changed; null for something new. */
  row: Row | null;
  blank: F;
  fieldsOf: (row: Row) => F;
  /** What can't be used as typed: field → sentence. */
  check?: (fields: F) => Record<string, string>;
  save: (fields: F, version: number | null) => Promise<Row>;
  onSaved: (row: Row) => void;
}

/** One thing in a form: typed, checked, saved, and settled with whoever saved it meanwhile. */
export function useEditing<F extends object, Row extends Versioned>(options: Editing<F, Row>) {
  const { row, blank, fieldsOf, check = () => ({}), save, onSaved } = options;
  let base = row ? fieldsOf(row) : blank;
  let version = row?.version ?? null;
  const form = ref(copyOf(base)) as Ref<F>;
  const conflict = shallowRef<Conflict<F> | null>(null);
  const error = shallowRef<unknown>(null);
  const wrong = ref<Record<string, string>>({});
  const busy = ref(false);

  const errors = computed(() => ({ ...fieldErrors(error.value), ...wrong.value }));
  const otherError = computed(() =>
    error.value && Object.keys(fieldErrors(error.value)).length === 0 ? sayError(error.value) : null,
  );
  const dirty = computed(() => JSON.stringify(form.value) !== JSON.stringify(base));

  async function submit(patch: Partial<F> = {}): Promise<void> {
    const mine = { ...form.value, ...patch };
    wrong.value = check(mine);
    error.value = null;
    if (busy.value || Object.keys(wrong.value).length > 0) return;
    busy.value = true;
    const settled = await attempt(mine).finally(() => (busy.value = false));
    if (settled === null) return;
    form.value = settled;
    await submit();
  }

  /** Saves. Where only one of two people changed a field the two are one, which is returned to be saved in turn. */
  async function attempt(mine: F): Promise<F | null> {
    try {
      onSaved(await save(mine, version));
      return null;
    } catch (problem) {
      const met = row && conflictOf(problem, base, mine, fieldsOf as (row: unknown) => F);
      if (!met) {
        error.value = problem;
        return null;
      }
      base = met.theirs;
      version = met.version;
      if (met.both.length === 0) return met.merged;
      conflict.value = met;
      return null;
    }
  }

  async function keep(sides: Record<string, 'yours' | 'theirs'>): Promise<void> {
    form.value = takeSides(conflict.value!.merged, conflict.value!.theirs, sides);
    conflict.value = null;
    await submit();
  }
  function drop(): void {
    form.value = copyOf(conflict.value!.theirs);
    conflict.value = null;
  }

  return { form, errors, otherError, conflict, busy, dirty, submit, keep, drop };
}

const copyOf = <F extends object>(fields: F): F => JSON.parse(JSON.stringify(fields)) as F;

function conflictOf<F extends object>(
  problem: unknown,
  base: F,
  mine: F,
  fieldsOf: (row: unknown) => F,
): Conflict<F> | null {
  if (!(problem instanceof ApiProblem) || problem.code !== 'stale' || !problem.problem.current) return null;
  const { current } = problem.problem;
  const theirs = fieldsOf(current);
  return {
    ...mergeVersions(base, mine, theirs),
    theirs,
    version: Number(current.version),
    savedBy: typeof current.savedBy === 'string' ? current.savedBy : null,
    savedAt: typeof current.savedAt === 'string' ? current.savedAt : null,
  };
}
