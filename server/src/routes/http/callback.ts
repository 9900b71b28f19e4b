import type { Request } from 'express';

/** Turns work that ends with a callback into a promise. */
export function finished(work: (done: (error?: unknown) => void) => void): Promise<void> {
  return new Promise((resolve, reject) => {
    work((error) =>
      error ? reject(error instanceof Error ? error : new Error('The work failed', { cause: error })) : resolve(),
    );
  });
}

/** The id under which a request is logged. */
export const requestIdOf = (request: Request): string =>
  typeof request.id === 'string' ? request.id : JSON.stringify(request.id ?? null);
