import { computed, ref, watch } from 'vue';
import type { Draft, Model } from '../../../shared/contracts/models.ts';
import type { Sheet } from '../../../shared/contracts/register.ts';
import { ApiProblem, fieldErrors } from '../../api/problem.ts';
import { useRefreshSheet, useSaveDraft } from '../../queries/register.ts';
import { blankModel, modelErrors, readModelForm, toModelForm, type ModelForm } from './model-form.ts';
import { useKept } from './use-kept.ts';

const startOf = (sheet: Sheet): ModelForm => {
  const model = sheet.draft?.model ?? sheet.revisionInForce?.model;
  return model ? toModelForm(model) : blankModel();
};

/** The draft of a model being edited: what is typed, whether it differs from what is saved, and saving it. */
export function useDraft(sheet: () => Sheet) {
  const save = useSaveDraft(() => sheet().id);
  const refresh = useRefreshSheet();
  const begin = () => ({ version: sheet().draft?.version ?? null, form: startOf(sheet()) });
  const { kept, forget } = useKept(`cupel.model-draft.${sheet().id}`, begin);
  const saved = ref<string>(JSON.stringify(startOf(sheet())));
  const dirty = computed(() => JSON.stringify(kept.value.form) !== saved.value);
  const tried = ref(false);

  function adopt() {
    kept.value = begin();
    saved.value = JSON.stringify(kept.value.form);
    tried.value = false;
  }
  // A draft that came from the server replaces the form only where nothing is lost by it.
  watch(
    () => sheet().draft?.version,
    () => {
      if (!dirty.value || JSON.stringify(startOf(sheet())) === JSON.stringify(kept.value.form)) adopt();
    },
  );

  const own = computed(() => {
    const read = readModelForm(kept.value.form);
    return 'errors' in read ? read.errors : {};
  });
  const errors = computed(() =>
    tried.value ? { ...modelErrors(fieldErrors(save.error.value)), ...own.value } : {},
  );
  const theirs = computed((): Draft | null => {
    const error = save.error.value;
    if (!(error instanceof ApiProblem) || error.code !== 'stale') return null;
    return (error.problem.current as Draft | undefined) ?? null;
  });

  /** Saves what is typed; resolves to the saved draft, or null where something must be mended first. */
  async function saveNow(version: number | null = kept.value.version): Promise<Draft | null> {
    tried.value = true;
    const read = readModelForm(kept.value.form);
    if ('errors' in read) return null;
    try {
      const draft = await save.mutateAsync({ model: read.model as Model, version });
      kept.value = { version: draft.version, form: toModelForm(draft.model) };
      saved.value = JSON.stringify(kept.value.form);
      return draft;
    } catch {
      return null;
    }
  }
  async function takeTheirs() {
    save.reset();
    forget();
    await refresh(sheet().id);
    adopt();
  }
  return { kept, dirty, errors, save, saveNow, theirs, takeTheirs };
}
