import type { Migration } from './migration';

export const qualityReports: Migration = {
  name: '0130-quality-reports',
  async up({ sql, app }) {
    // Made once for a confirmed definition, which never changes: neither does what is said of it.
    await sql(`
      CREATE TABLE quality_reports (
        definition_id uuid PRIMARY KEY REFERENCES sample_definitions,
        run_id uuid NOT NULL REFERENCES runs,
        baseline jsonb,
        months jsonb NOT NULL,
        flags jsonb NOT NULL,
        made_at timestamptz NOT NULL DEFAULT now()
      )`);
    await sql(`
      CREATE TABLE quality_columns (
        definition_id uuid NOT NULL REFERENCES quality_reports,
        position integer NOT NULL,
        detail jsonb NOT NULL,
        PRIMARY KEY (definition_id, position)
      )`);
    // An answer is to a flag of the sample, whichever definition raised it; a later answer stands beside the earlier one.
    await sql(`
      CREATE TABLE quality_answers (
        id uuid PRIMARY KEY DEFAULT gen_random_uuid(),
        sequence bigint GENERATED ALWAYS AS IDENTITY,
        sample_id uuid NOT NULL REFERENCES samples,
        column_name text,
        code text NOT NULL,
        answer text NOT NULL CHECK (answer IN ('accepted', 'not used')),
        reason text NOT NULL,
        answered_by uuid NOT NULL REFERENCES people,
        answered_at timestamptz NOT NULL DEFAULT now()
      )`);
    await sql('CREATE INDEX quality_answers_sample ON quality_answers (sample_id, sequence)');
    await sql(`GRANT SELECT, INSERT ON quality_reports, quality_columns, quality_answers TO ${app}`);
  },
};
