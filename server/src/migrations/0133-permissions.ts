import type { Migration } from './migration';

export const permissions: Migration = {
  name: '0133-permissions',
  async up({ sql, app }) {
    // Of a confirmed definition, which never changes: what was permitted is exactly what was seen. A withdrawal stands beside what it withdraws.
    await sql(`
      CREATE TABLE protected_permissions (
        id uuid PRIMARY KEY DEFAULT gen_random_uuid(),
        sequence bigint GENERATED ALWAYS AS IDENTITY,
        definition_id uuid NOT NULL REFERENCES sample_definitions,
        column_name text NOT NULL,
        act text NOT NULL CHECK (act IN ('permitted', 'withdrawn')),
        citation text NOT NULL CHECK (citation <> ''),
        reason text NOT NULL CHECK (reason <> ''),
        acted_by uuid NOT NULL REFERENCES people,
        acted_at timestamptz NOT NULL DEFAULT now()
      )`);
    await sql('CREATE INDEX protected_permissions_definition ON protected_permissions (definition_id, sequence)');
    await sql(`GRANT SELECT, INSERT ON protected_permissions TO ${app}`);
  },
};
