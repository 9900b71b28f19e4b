import * as fs from 'node:fs';

/** The headless build first: the same engine without the windows, which takes a quarter less of the time. */
const places = [
  '/usr/bin/chromium-headless-shell',
  '/usr/bin/chromium',
  '/usr/bin/chromium-browser',
  '/usr/bin/google-chrome',
  '/Applications/Google Chrome.app/Contents/MacOS/Google Chrome',
];

/**
 * The browser of the system, as `TALLYSTONE_CHROMIUM` says or where it usually lies: the npm package would download one of its own.
 * @returns {string | undefined}
 */
export const findBrowser = () => process.env.TALLYSTONE_CHROMIUM || places.find((file) => fs.existsSync(file));
