/** First half of the advisory lock that a living worker holds; the second half is made of its id. */
export const lifeLock = 0x43757065;
