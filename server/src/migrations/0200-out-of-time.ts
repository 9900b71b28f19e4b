import type { Migration } from './migration';

export const outOfTime: Migration = {
  name: '0200-out-of-time',
  async up({ sql, app }) {
    await sql(`
      CREATE TABLE out_of_time_openings (
        id uuid PRIMARY KEY DEFAULT gen_random_uuid(),
        definition_id uuid NOT NULL REFERENCES sample_definitions,
        number integer NOT NULL,
        reason text NOT NULL,
        opened_by uuid NOT NULL REFERENCES people,
        opened_at timestamptz NOT NULL DEFAULT now(),
        UNIQUE (definition_id, number)
      )`);
    // A look cannot be taken back: nobody may change or remove one.
    await sql(`GRANT SELECT, INSERT ON out_of_time_openings TO ${app}`);
  },
};
