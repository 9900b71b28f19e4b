import { type AccessRow, everyRole, forRoles, only, open } from './access';

const signedIn = (route: string): AccessRow => ({ route, own: everyRole('yes') });

export const baseRows: readonly AccessRow[] = [
  open('GET /health/live'),
  open('GET /health/ready'),
  signedIn('GET /api/openapi.json'),

  open('GET /api/session'),
  open('POST /api/session'),
  signedIn('DELETE /api/session'),
  signedIn('PUT /api/session/password'),
  signedIn('GET /api/sessions'),
  { route: 'DELETE /api/sessions/:sessionId', nonexistent: everyRole(404) },
  open('GET /api/set-up'),
  open('POST /api/set-up'),

  forRoles('GET /api/people', ['admin', 'compliance', 'auditor']),
  {
    route: 'GET /api/people/:personId',
    own: only(['admin', 'compliance', 'auditor']),
    nonexistent: { ...only([]), admin: 404, compliance: 404, auditor: 404 },
  },
  { route: 'PUT /api/people/:personId/roles', own: only(['admin']), nonexistent: { ...only([]), admin: 404 } },
  { route: 'POST /api/people/:personId/disable', own: only(['admin']), nonexistent: { ...only([]), admin: 404 } },
  { route: 'POST /api/people/:personId/enable', own: only(['admin']), nonexistent: { ...only([]), admin: 404 } },

  forRoles('GET /api/invitations', ['admin']),
  forRoles('POST /api/invitations', ['admin']),
  { route: 'DELETE /api/invitations/:invitationId', nonexistent: { ...only([]), admin: 404 } },
  open('POST /api/invitations/look-up'),
  open('POST /api/invitations/accept'),

  signedIn('GET /api/record'),
  forRoles('GET /api/record/head', ['validator', 'compliance', 'admin', 'auditor']),
  forRoles('POST /api/record/verifications', ['validator', 'compliance', 'admin', 'auditor']),

  signedIn('GET /api/runs'),
  {
    route: 'GET /api/runs/:runId',
    own: { modeller: 'yes', validator: 'yes', compliance: 'yes', admin: 404, auditor: 'yes' },
    another: { modeller: 404, validator: 'yes', compliance: 'yes', admin: 404, auditor: 'yes' },
    nonexistent: everyRole(404),
  },
  {
    route: 'POST /api/runs/:runId/cancel',
    own: { modeller: 'yes', validator: 403, compliance: 403, admin: 404, auditor: 403 },
    another: { modeller: 404, validator: 403, compliance: 403, admin: 404, auditor: 403 },
    nonexistent: everyRole(404),
  },
  signedIn('GET /api/events'),
];
