import type { Migration } from './migration';

export const fits: Migration = {
  name: '0300-fits',
  async up({ sql, app }) {
    await sql(`
      CREATE TABLE fits (
        id uuid PRIMARY KEY,
        model_id uuid NOT NULL REFERENCES models,
        number integer NOT NULL,
        name text NOT NULL,
        binning_id uuid NOT NULL REFERENCES binnings,
        definition_id uuid NOT NULL REFERENCES sample_definitions,
        -- column -> revision of the binning's characteristics as they were fitted, to tell when the bins have moved on
        binning_revisions jsonb NOT NULL,
        settings jsonb NOT NULL,
        -- RFC 8785 canonical JSON, kept as text so that its bytes are those that were hashed
        specification text NOT NULL,
        specification_sha256 text NOT NULL CHECK (specification_sha256 ~ '^[0-9a-f]{64}$'),
        characteristics integer NOT NULL,
        run_id uuid,
        revision integer NOT NULL DEFAULT 1,
        created_at timestamptz NOT NULL DEFAULT now(),
        created_by uuid NOT NULL REFERENCES people,
        UNIQUE (model_id, number)
      )`);
    // One row per fit that has run to its end, written once.
    await sql(`
      CREATE TABLE fit_paths (
        fit_id uuid PRIMARY KEY REFERENCES fits,
        run_id uuid NOT NULL,
        attempt integer NOT NULL,
        path jsonb NOT NULL,
        development jsonb NOT NULL,
        hold_out jsonb NOT NULL,
        -- apart from the rest, so that covered figures are not even read
        out_of_time jsonb,
        finished_at timestamptz NOT NULL DEFAULT now()
      )`);
    // Every choice stays; the latest is the one that counts.
    await sql(`
      CREATE TABLE fit_choices (
        id uuid PRIMARY KEY DEFAULT gen_random_uuid(),
        sequence bigint GENERATED ALWAYS AS IDENTITY,
        fit_id uuid NOT NULL REFERENCES fits,
        place integer NOT NULL CHECK (place >= 0),
        lambda double precision NOT NULL,
        kept integer NOT NULL,
        rule text NOT NULL CHECK (rule IN ('minimum', 'one-standard-error', 'by hand')),
        reason text NOT NULL,
        chosen_at timestamptz NOT NULL DEFAULT now(),
        chosen_by uuid NOT NULL REFERENCES people
      )`);
    await sql('CREATE INDEX fit_choices_fit ON fit_choices (fit_id, sequence DESC)');
    await sql(`GRANT SELECT, INSERT, UPDATE ON fits TO ${app}`);
    await sql(`GRANT SELECT, INSERT ON fit_paths, fit_choices TO ${app}`);
  },
};
