/** How long a phone in the row waits for an answer: a weak signal carries a batch in seconds, a dead line never answers. */
export const patienceMs = 30_000;
