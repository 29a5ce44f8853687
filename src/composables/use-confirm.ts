import { useQuasar } from 'quasar';
import ConfirmDialog from '../components/base/ConfirmDialog.vue';

export interface Question {
  /** Names the thing: "Remove the limit sheet of TY-1402?" */
  title: string;
  /** What will happen, and what can't be had back. */
  says?: string;
  /** What the button does: "Remove the sheet". */
  action: string;
  /** Label of a reason to be written first; the promise then gives it. */
  reason?: string;
  /** The reason may be left out now. */
  reasonLater?: boolean;
  cancel?: string;
}

/** Asks before what cannot be undone. Resolves to null when the person steps back, else to the reason ('' when none was asked). */
export function useConfirm() {
  const $q = useQuasar();
  return (question: Question): Promise<string | null> =>
    new Promise((resolve) => {
      $q.dialog({ component: ConfirmDialog, componentProps: question })
        .onOk((reason: string) => resolve(reason))
        .onDismiss(() => resolve(null));
    });
}
