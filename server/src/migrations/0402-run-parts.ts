import type { Migration } from './migration';

/** A part that takes longer than this without a sign of life is taken from its worker by the lease in run_parts, not by the queue. */
const options = { policy: 'standard', retryLimit: 0, expireInSeconds: 3600, retentionMinutes: 24 * 60 };

/** Parts of runs that are spread over the workers: pure pieces of work with a plain description and a plain result. */
export const runParts: Migration = {
  name: '0402-run-parts',
  async up({ sql, app }) {
    await sql(`
      CREATE TABLE run_parts (
        run_id uuid NOT NULL REFERENCES runs ON DELETE CASCADE,
        number integer NOT NULL,
        kind text NOT NULL,
        payload jsonb NOT NULL,
        state text NOT NULL DEFAULT 'open' CHECK (state IN ('open', 'done', 'failed')),
        holder text,
        lease uuid,
        lease_until timestamptz,
        times_taken integer NOT NULL DEFAULT 0,
        -- JSON as text, so that every number comes back as it was written
        result text,
        problem jsonb,
        PRIMARY KEY (run_id, number)
      )`);
    await sql(`GRANT SELECT, INSERT, UPDATE, DELETE ON run_parts TO ${app}`);
    await sql(`SELECT pgboss.create_queue('part', '${JSON.stringify(options)}')`);
  },
};
