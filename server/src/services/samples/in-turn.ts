import { threadCount } from '../../threads/run-in-thread';

/** Works through what there is, one more at a time than there are threads, so that none waits for the database. */
export async function inTurn<Item>(items: readonly Item[], work: (item: Item) => Promise<void>): Promise<void> {
  const left = [...items];
  const workers = Array.from({ length: threadCount() + 1 }, async () => {
    for (let next = left.shift(); next !== undefined; next = left.shift()) await work(next);
  });
  // After a failure nothing new is begun.
  await Promise.all(workers).catch((failure: unknown) => {
    left.length = 0;
    throw failure;
  });
}
