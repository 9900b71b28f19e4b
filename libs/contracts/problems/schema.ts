import { z } from 'zod';

/** One thing that is wrong, and where: a field of the body, a column and line of a file, a gate of a version. */
export const ProblemItem = z
  .object({
    code: z.string(),
    message: z.string(),
    where: z.record(z.string(), z.union([z.string(), z.number(), z.boolean()])),
  })
  .meta({ id: 'ProblemItem' });
export type ProblemItem = z.infer<typeof ProblemItem>;

/** RFC 9457 problem details, with a stable code for programs and every problem of an input at once for people. */
export const ProblemDetails = z
  .object({
    type: z.string(),
    title: z.string(),
    status: z.int(),
    code: z.string(),
    detail: z.string(),
    problems: z.array(ProblemItem),
    requestId: z.string().optional(),
  })
  .meta({ id: 'Problem' });
export type ProblemDetails = z.infer<typeof ProblemDetails>;
