import { migrate } from '../migrations/migrate';

/** `migrate`: brings the schema up to date. Needs DATABASE_OWNER_URL (the owner) and DATABASE_URL (whose role is granted its rights). */

const { DATABASE_OWNER_URL: owner, DATABASE_URL: app } = process.env;
const missing = Object.entries({ DATABASE_OWNER_URL: owner, DATABASE_URL: app }).filter(([, value]) => !value);
if (!owner || !app) {
  console.error(missing.map(([name]) => `${name}: is missing`).join('\n'));
  process.exit(1);
}
try {
  const done = await migrate(owner, app);
  console.log(done.length > 0 ? `Applied ${done.join(', ')}` : 'The schema is up to date');
} catch (error) {
  console.error(error instanceof Error ? error.message : error);
  process.exitCode = 1;
}
