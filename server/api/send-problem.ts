import type { ErrorRequestHandler, RequestHandler, Response } from 'express';
import type { Logger } from 'pino';
import { problemOf, problemOfStatus, type ProblemAnswer } from './problem.ts';

export function sendProblem(response: Response, { body, headers }: ProblemAnswer): void {
  response.status(body.status).set(headers).type('application/problem+json').send(JSON.stringify(body));
}

export const noSuchEndpoint: RequestHandler = (request, response) => {
  sendProblem(response, problemOfStatus(404, `There is no ${request.method} ${request.baseUrl}${request.path}`));
};

/** Turns whatever was thrown into problem details. What is our own fault is logged and not told. */
export function answerErrors(log: Logger): ErrorRequestHandler {
  return (error, request, response, next) => {
    const problem = problemOf(error);
    if (problem === null) log.error({ err: error, method: request.method, path: request.path }, 'a request failed');
    if (response.headersSent) {
      next(error);
      return;
    }
    sendProblem(response, problem ?? problemOfStatus(500, 'The server could not do this; its log says why'));
  };
}
