import type { Migration } from './migration';

export const models: Migration = {
  name: '0100-models',
  async up({ sql, app }) {
    await sql(`
      CREATE TABLE models (
        id uuid PRIMARY KEY DEFAULT gen_random_uuid(),
        number integer GENERATED ALWAYS AS IDENTITY,
        inventory_number text NOT NULL UNIQUE GENERATED ALWAYS AS ('M-' || lpad(number::text, greatest(4, length(number::text)), '0')) STORED,
        name text NOT NULL,
        purpose text NOT NULL,
        product text NOT NULL,
        population text NOT NULL,
        jurisdiction text NOT NULL,
        owner text NOT NULL,
        materiality_tier smallint NOT NULL CHECK (materiality_tier BETWEEN 1 AND 3),
        intended_use text NOT NULL,
        prohibited_use text NOT NULL,
        revision integer NOT NULL DEFAULT 1,
        created_at timestamptz NOT NULL DEFAULT now(),
        created_by uuid NOT NULL REFERENCES people,
        updated_at timestamptz NOT NULL DEFAULT now()
      )`);
    await sql('ALTER TABLE model_members ADD CONSTRAINT model_members_model FOREIGN KEY (model_id) REFERENCES models');
    // A model is never deleted: the inventory shows what was, and the record names it.
    await sql(`GRANT SELECT, INSERT, UPDATE ON models TO ${app}`);
  },
};
