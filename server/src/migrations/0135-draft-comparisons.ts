import type { Migration } from './migration';

export const draftComparisons: Migration = {
  name: '0135-draft-comparisons',
  async up({ sql, app }) {
    // Each time that the partitions of a draft were compared: who looks at many seeds and keeps the one he likes leaves them all here.
    await sql(`
      CREATE TABLE sample_draft_comparisons (
        id uuid PRIMARY KEY DEFAULT gen_random_uuid(),
        sequence bigint GENERATED ALWAYS AS IDENTITY,
        sample_id uuid NOT NULL REFERENCES samples ON DELETE CASCADE,
        reading_id uuid NOT NULL,
        revision integer NOT NULL,
        partition text NOT NULL,
        largest double precision,
        characteristics jsonb,
        compared_by uuid NOT NULL REFERENCES people,
        compared_at timestamptz NOT NULL DEFAULT clock_timestamp()
      )`);
    await sql('CREATE INDEX sample_draft_comparisons_sample ON sample_draft_comparisons (sample_id, sequence)');
    await sql(`GRANT SELECT, INSERT, UPDATE (characteristics) ON sample_draft_comparisons TO ${app}`);
  },
};
