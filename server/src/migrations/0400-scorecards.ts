import type { Migration } from './migration';

export const scorecards: Migration = {
  name: '0400-scorecards',
  async up({ sql, app }) {
    // Scaling, bands, reason texts and cut-off of a fit. What a version took is frozen in its specification; this row stays editable.
    await sql(`
      CREATE TABLE scorecards (
        fit_id uuid PRIMARY KEY REFERENCES fits,
        settings jsonb NOT NULL,
        revision integer NOT NULL DEFAULT 1,
        changed_at timestamptz NOT NULL DEFAULT now(),
        changed_by uuid NOT NULL REFERENCES people
      )`);
    await sql(`GRANT SELECT, INSERT, UPDATE ON scorecards TO ${app}`);
  },
};
