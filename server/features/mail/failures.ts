/** How a failed mail begins its last error where its server will never take it. */
export const refusedForGood = 'The mail server refuses this address: ';

/** How it begins where Cupel itself will not send it any more. */
export const notSent = 'Not sent: ';
