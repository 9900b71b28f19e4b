import { hashPassword, verifyPassword } from './passwords';

/**
 * Every task that can run in a thread, by name. A task is a pure function (payload, control) => result; it knows no database and no clock.
 * Another entity adds an import and a line. The pool takes only the types from here, so that the web server does not load the numbers.
 */
export const tasks = {
  'password.hash': hashPassword,
  'password.verify': verifyPassword,
} as const;

export type Tasks = typeof tasks;
export type TaskName = keyof Tasks;
export type TaskPayload<Name extends TaskName> = Parameters<Tasks[Name]>[0];
export type TaskResult<Name extends TaskName> = Awaited<ReturnType<Tasks[Name]>>;
