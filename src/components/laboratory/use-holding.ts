import { useQuasar } from 'quasar';
import { computed } from 'vue';
import type { Sample } from '../../../shared/contracts/samples.ts';
import { useConfirm } from '../../composables/use-confirm.ts';
import { useAskRetest, useReleaseSample } from '../../queries/laboratory.ts';

type Held = Pick<Sample, 'id' | 'sampleNumber' | 'version' | 'heldSince'>;

/** Releases a held sample, or asks for a second analysis of one, each with a reason that is asked for first. */
export function useHolding() {
  const $q = useQuasar();
  const confirm = useConfirm();
  const releasing = useReleaseSample();
  const asking = useAskRetest();

  async function release(sample: Held): Promise<void> {
    const reason = await confirm({
      title: `Release the sample ${sample.sampleNumber}?`,
      says: 'It counts from now on, and the soft sensors that it goes to are judged again.',
      action: 'Release the sample',
      reason: 'Why it counts',
    });
    if (reason === null) return;
    releasing.mutate(
      { id: sample.id, reason, version: sample.version },
      { onSuccess: () => $q.notify(`${sample.sampleNumber} counts again.`) },
    );
  }

  async function ask(sample: Held): Promise<void> {
    const reason = await confirm({
      title: `Ask for a re-test of ${sample.sampleNumber}?`,
      says: sample.heldSince
        ? 'The laboratory finds it among the samples of the shift.'
        : 'The laboratory finds it among the samples of the shift. Until it is answered this result does not count.',
      action: 'Ask for a re-test',
      reason: 'What the laboratory should know',
    });
    if (reason === null) return;
    asking.mutate(
      { id: sample.id, reason },
      { onSuccess: () => $q.notify(`A re-test of ${sample.sampleNumber} is asked for.`) },
    );
  }

  return {
    release,
    ask,
    releasing: computed(() => releasing.isPending.value),
    asking: computed(() => asking.isPending.value),
    error: computed(() => releasing.error.value ?? asking.error.value),
  };
}
