/**
 * Keeps answers in the order in which they were asked: `take` is called with the answer of the newest request only, so that
 * one that was overtaken never puts older facts back on the screen.
 */
export function inOrder(): <T>(request: () => Promise<T>, take: (answer: T) => void) => Promise<void> {
  let newest = 0;
  return async (request, take) => {
    const mine = ++newest;
    const answer = await request();
    if (mine === newest) take(answer);
  };
}
