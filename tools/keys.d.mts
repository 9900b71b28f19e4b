/** Path of the keys file of a data folder, made with random keys when there is none. */
export function ensureKeys(data: string): string;
