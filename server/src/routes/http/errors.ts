import { problemCodes } from '@tallystone/contracts/problems/codes';
import type { ProblemDetails } from '@tallystone/contracts/problems/schema';
import type { ErrorRequestHandler, Response } from 'express';
import type { Context } from '../../context';
import { problemFrom } from '../../problems/from-error';
import { Problem } from '../../problems/problem';
import { requestIdOf } from './callback';

/** The last middleware: whatever was thrown leaves as RFC 9457 problem details; a fault of ours is logged and told without its inside. */
export function answerErrors(context: Context): ErrorRequestHandler {
  return (error: unknown, request, response, _next) => {
    const known = problemFrom(error);
    if (!known)
      context.log.error({ err: error, requestId: request.id, method: request.method, path: request.path }, 'a request failed');
    const problem =
      known ??
      new Problem(
        500,
        problemCodes.internal,
        'Something went wrong on our side. Nothing was changed. The request id leads to the log.',
      );
    if (response.headersSent) {
      response.destroy();
      return;
    }
    sendProblem(response, problem, requestIdOf(request));
  };
}

export function sendProblem(response: Response, problem: Problem, requestId: string): void {
  const body: ProblemDetails = {
    type: `urn:tallystone:problem:${problem.code}`,
    title: problem.title,
    status: problem.status,
    code: problem.code,
    detail: problem.detail,
    problems: [...problem.problems],
    requestId,
  };
  for (const [name, value] of Object.entries(problem.headers)) response.setHeader(name, value);
  response.status(problem.status).type('application/problem+json').send(JSON.stringify(body));
}
