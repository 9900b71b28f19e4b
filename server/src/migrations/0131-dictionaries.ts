import type { Migration } from './migration';

export const dictionaries: Migration = {
  name: '0131-dictionaries',
  async up({ sql, app }) {
    await sql(`
      CREATE TABLE sample_dictionaries (
        sample_id uuid PRIMARY KEY REFERENCES samples ON DELETE CASCADE,
        entries jsonb NOT NULL,
        revision integer NOT NULL DEFAULT 1,
        carried jsonb,
        saved_at timestamptz,
        saved_by uuid REFERENCES people
      )`);
    await sql(`GRANT SELECT, INSERT, UPDATE, DELETE ON sample_dictionaries TO ${app}`);
  },
};
