import { APP_BASE_HREF } from '@angular/common';
import { provideHttpClient, withFetch, withInterceptors } from '@angular/common/http';
import {
  type ApplicationConfig,
  ErrorHandler,
  provideBrowserGlobalErrorListeners,
  provideZonelessChangeDetection,
} from '@angular/core';
import { MAT_FORM_FIELD_DEFAULT_OPTIONS, type MatFormFieldDefaultOptions } from '@angular/material/form-field';
import {
  TitleStrategy,
  provideRouter,
  withComponentInputBinding,
  withInMemoryScrolling,
  withRouterConfig,
} from '@angular/router';
import { routes } from './app.routes';
import { ShowsFailures } from './core/errors';
import { problemInterceptor, signedOutInterceptor } from './core/http/interceptors';
import { PageTitles } from './core/navigation';
import { provideIcons } from './ui/register-icons';

export const appConfig: ApplicationConfig = {
  providers: [
    provideZonelessChangeDetection(),
    provideBrowserGlobalErrorListeners(),
    // Instead of a <base> element, which the content security policy forbids.
    { provide: APP_BASE_HREF, useValue: '/' },
    provideRouter(
      routes,
      withComponentInputBinding(),
      withInMemoryScrolling({ scrollPositionRestoration: 'enabled', anchorScrolling: 'enabled' }),
      withRouterConfig({ paramsInheritanceStrategy: 'always' }),
    ),
    // Cross-site request forgery is met by Angular's own convention: cookie XSRF-TOKEN, header X-XSRF-TOKEN, on by default.
    provideHttpClient(withFetch(), withInterceptors([problemInterceptor, signedOutInterceptor])),
    provideIcons(),
    { provide: TitleStrategy, useExisting: PageTitles },
    { provide: ErrorHandler, useClass: ShowsFailures },
    {
      provide: MAT_FORM_FIELD_DEFAULT_OPTIONS,
      useValue: {
        appearance: 'outline',
        subscriptSizing: 'dynamic',
        floatLabel: 'always',
        hideRequiredMarker: true,
      } satisfies MatFormFieldDefaultOptions,
    },
  ],
};
