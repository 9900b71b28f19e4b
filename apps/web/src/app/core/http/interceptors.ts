import { HttpErrorResponse, type HttpInterceptorFn } from '@angular/common/http';
import { inject } from '@angular/core';
import { catchError, throwError } from 'rxjs';
import { Session } from '../session';
import { problemFrom } from './problem';

/** Every failed answer becomes a typed Problem. */
export const problemInterceptor: HttpInterceptorFn = (request, next) =>
  next(request).pipe(
    catchError((error: unknown) => throwError(() => (error instanceof HttpErrorResponse ? problemFrom(error) : error))),
  );

/**
 * A 401 on anything but the session itself means that the session has ended (idle, disabled, roles changed, ended from elsewhere): the
 * person is taken to sign-in and comes back to the page they were on. A wrong password is a 401 of /api/session and stays on its page.
 */
export const signedOutInterceptor: HttpInterceptorFn = (request, next) => {
  const session = inject(Session);
  return next(request).pipe(
    catchError((error: unknown) => {
      const ended = error instanceof HttpErrorResponse && error.status === 401;
      if (ended && !request.url.startsWith('/api/session')) session.ended();
      return throwError(() => error);
    }),
  );
};
