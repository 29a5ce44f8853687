/** Counted references since the last recalibration from which a Fit soft sensor may be confirmed as found without evidence being looked at one by one. */
export const referencesToConfirm = 15;
