import { existsSync, readFileSync } from 'node:fs';
import { type Ground, install, installOn } from './installation';

/** Starts Tallystone with its demo before the browser tests and stops it after them; the tests find where in the environment. */
export default async function setUp(): Promise<() => Promise<void>> {
  // A step of `npm test` before this one has made the demo; without that step it is made here.
  const laid = process.env['TALLYSTONE_E2E_GROUND'];
  const installation =
    laid && existsSync(laid) ? await installOn(JSON.parse(readFileSync(laid, 'utf8')) as Ground) : await install({ demo: true });
  process.env['TALLYSTONE_E2E_URL'] = installation.url;
  process.env['TALLYSTONE_E2E_SIGN_INS'] = JSON.stringify(installation.signIns);
  process.env['TALLYSTONE_E2E_DATA'] = installation.dataFolder;
  process.env['TALLYSTONE_E2E_DATABASE'] = installation.appUrl;
  return () => installation.stop();
}
