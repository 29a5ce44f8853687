/** The zone of whoever looks: for what belongs to no site. */
export const ownZone = Intl.DateTimeFormat().resolvedOptions().timeZone;
