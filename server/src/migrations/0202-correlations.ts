import type { Migration } from './migration';

export const correlations: Migration = {
  name: '0202-correlations',
  async up({ sql, app }) {
    await sql('ALTER TABLE binning_characteristics ADD COLUMN out_of_time_csi double precision');
    await sql(`
      CREATE TABLE binning_correlations (
        binning_id uuid PRIMARY KEY REFERENCES binnings ON DELETE CASCADE,
        -- Which characteristics, in the order of the matrix, each with the bins it had.
        characteristics jsonb NOT NULL,
        matrix jsonb NOT NULL,
        rows integer NOT NULL,
        made_at timestamptz NOT NULL DEFAULT now()
      )`);
    await sql(`GRANT SELECT, INSERT, UPDATE ON binning_correlations TO ${app}`);
  },
};
