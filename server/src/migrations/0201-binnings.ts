import type { Migration } from './migration';

export const binnings: Migration = {
  name: '0201-binnings',
  async up({ sql, app }) {
    await sql(`
      CREATE TABLE binnings (
        id uuid PRIMARY KEY DEFAULT gen_random_uuid(),
        model_id uuid NOT NULL REFERENCES models,
        definition_id uuid NOT NULL REFERENCES sample_definitions,
        number integer NOT NULL,
        name text NOT NULL,
        constraints jsonb NOT NULL,
        barred jsonb NOT NULL DEFAULT '[]',
        run_id uuid REFERENCES runs,
        ready_at timestamptz,
        created_at timestamptz NOT NULL DEFAULT now(),
        created_by uuid NOT NULL REFERENCES people,
        UNIQUE (model_id, number)
      )`);
    await sql('CREATE INDEX binnings_definition ON binnings (definition_id)');
    await sql(`
      CREATE TABLE binning_characteristics (
        id uuid PRIMARY KEY DEFAULT gen_random_uuid(),
        binning_id uuid NOT NULL REFERENCES binnings ON DELETE CASCADE,
        position integer NOT NULL,
        column_name text NOT NULL,
        kind text NOT NULL CHECK (kind IN ('numeric', 'categorical')),
        definition jsonb NOT NULL,
        automatic jsonb NOT NULL,
        constraints jsonb NOT NULL,
        fine jsonb NOT NULL,
        out_of_time jsonb NOT NULL,
        summary jsonb NOT NULL,
        out_of_time_warnings jsonb NOT NULL DEFAULT '[]',
        included boolean NOT NULL DEFAULT true,
        left_out_reason text NOT NULL DEFAULT '',
        revision integer NOT NULL DEFAULT 1,
        changed_at timestamptz NOT NULL DEFAULT now(),
        changed_by uuid NOT NULL REFERENCES people,
        UNIQUE (binning_id, column_name)
      )`);
    await sql(`
      CREATE TABLE binning_edits (
        id uuid PRIMARY KEY,
        characteristic_id uuid NOT NULL REFERENCES binning_characteristics ON DELETE CASCADE,
        sequence bigint GENERATED ALWAYS AS IDENTITY,
        place integer,
        kind text NOT NULL,
        what text NOT NULL,
        before jsonb NOT NULL,
        after jsonb NOT NULL,
        reason jsonb,
        made_by uuid NOT NULL REFERENCES people,
        made_at timestamptz NOT NULL DEFAULT now()
      )`);
    await sql('CREATE INDEX binning_edits_characteristic ON binning_edits (characteristic_id, sequence)');
    await sql(`
      CREATE TABLE binning_codes (
        characteristic_id uuid PRIMARY KEY REFERENCES binning_characteristics ON DELETE CASCADE,
        revision integer NOT NULL,
        bins jsonb NOT NULL,
        codes bytea NOT NULL
      )`);
    // Codes are compressed before they come here.
    await sql('ALTER TABLE binning_codes ALTER COLUMN codes SET STORAGE EXTERNAL');
    await sql(`GRANT SELECT, INSERT, UPDATE ON binnings, binning_characteristics, binning_edits TO ${app}`);
    await sql(`GRANT SELECT, INSERT, UPDATE, DELETE ON binning_codes TO ${app}`);
  },
};
