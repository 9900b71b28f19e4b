import type { Migration } from './migration';

export const binningMonths: Migration = {
  name: '0210-binning-months',
  async up({ sql, app }) {
    await sql(`
      CREATE TABLE binning_months (
        characteristic_id uuid PRIMARY KEY REFERENCES binning_characteristics ON DELETE CASCADE,
        -- Slots by month of development and hold-out; null where the sample has no months. Out-of-time lies apart, as it is covered at first.
        counts jsonb,
        out_of_time jsonb
      )`);
    await sql(`GRANT SELECT, INSERT, UPDATE ON binning_months TO ${app}`);
  },
};
