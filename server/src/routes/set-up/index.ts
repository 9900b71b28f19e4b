import { readSetUp, setUp } from '@tallystone/contracts/set-up/endpoints';
import * as first from '../../services/set-up/set-up';
import { type Route, defineRoute } from '../http/route';

export const setUpRoutes: readonly Route[] = [
  defineRoute(readSetUp, { access: 'anyone', act: async ({ context }) => ({ open: await first.setUpIsOpen(context) }) }),
  defineRoute(setUp, { access: 'anyone', ownTransactions: true, act: ({ context, body }) => first.setUp(context, body) }),
];
