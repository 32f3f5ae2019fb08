import { demoAccounts, demoPassword } from '../../../../scripts/demo/accounts.mjs';
import { config } from '../config';

/** What the sign-in page shows of the invented laboratory; null where there is none. */
export function demoSignIn() {
  if (config.mode !== 'demo') return null;
  return {
    password: demoPassword,
    accounts: demoAccounts.map(({ email, name, role }) => ({ email, name, role })),
  };
}
