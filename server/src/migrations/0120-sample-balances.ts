import type { Migration } from './migration';

export const sampleBalances: Migration = {
  name: '0120-sample-balances',
  async up({ sql, app }) {
    // Worked out when a definition is confirmed, and as unchangeable as the definition.
    await sql(`
      CREATE TABLE sample_balances (
        definition_id uuid PRIMARY KEY REFERENCES sample_definitions,
        characteristics jsonb NOT NULL
      )`);
    await sql(`GRANT SELECT, INSERT ON sample_balances TO ${app}`);
  },
};
