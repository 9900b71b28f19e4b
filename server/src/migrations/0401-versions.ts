import type { Migration } from './migration';

export const versions: Migration = {
  name: '0401-versions',
  async up({ sql, app }) {
    // Frozen: the application may add rows here and can neither change nor remove any. A version's state is that of its latest act.
    await sql(`
      CREATE TABLE versions (
        id uuid PRIMARY KEY,
        model_id uuid NOT NULL REFERENCES models,
        number integer NOT NULL,
        fit_id uuid NOT NULL REFERENCES fits,
        choice_id uuid NOT NULL REFERENCES fit_choices,
        binning_id uuid NOT NULL REFERENCES binnings,
        definition_id uuid NOT NULL REFERENCES sample_definitions,
        note text NOT NULL,
        -- RFC 8785 canonical JSON, as text, so that their bytes are those that were hashed
        specification text NOT NULL,
        specification_sha256 text NOT NULL CHECK (specification_sha256 ~ '^[0-9a-f]{64}$'),
        result text NOT NULL,
        result_sha256 text NOT NULL CHECK (result_sha256 ~ '^[0-9a-f]{64}$'),
        data_sha256 text NOT NULL CHECK (data_sha256 ~ '^[0-9a-f]{64}$'),
        scores_sha256 text NOT NULL CHECK (scores_sha256 ~ '^[0-9a-f]{64}$'),
        code_version text NOT NULL,
        fingerprint text NOT NULL CHECK (fingerprint ~ '^[0-9a-f]{64}$'),
        run_id uuid NOT NULL,
        frozen_at timestamptz NOT NULL DEFAULT now(),
        frozen_by uuid NOT NULL REFERENCES people,
        UNIQUE (model_id, number)
      )`);
    await sql(`
      CREATE TABLE version_acts (
        id uuid PRIMARY KEY DEFAULT gen_random_uuid(),
        sequence bigint GENERATED ALWAYS AS IDENTITY,
        version_id uuid NOT NULL REFERENCES versions,
        act text NOT NULL,
        from_state text,
        to_state text NOT NULL,
        conclusion text,
        conditions jsonb NOT NULL DEFAULT '[]',
        statement text NOT NULL,
        role text NOT NULL CHECK (role IN ('modeller', 'validator', 'compliance')),
        person_id uuid NOT NULL REFERENCES people,
        at timestamptz NOT NULL DEFAULT now()
      )`);
    await sql('CREATE INDEX version_acts_version ON version_acts (version_id, sequence)');
    await sql(`
      CREATE TABLE version_texts (
        version_id uuid PRIMARY KEY REFERENCES versions,
        texts jsonb NOT NULL,
        revision integer NOT NULL DEFAULT 1,
        changed_at timestamptz NOT NULL DEFAULT now(),
        changed_by uuid NOT NULL REFERENCES people
      )`);
    await sql(`
      CREATE TABLE evidence (
        id uuid PRIMARY KEY DEFAULT gen_random_uuid(),
        version_id uuid NOT NULL REFERENCES versions,
        number integer NOT NULL,
        kind text NOT NULL,
        title text NOT NULL,
        content text NOT NULL,
        sha256 text NOT NULL CHECK (sha256 ~ '^[0-9a-f]{64}$'),
        run_id uuid,
        person_id uuid NOT NULL REFERENCES people,
        at timestamptz NOT NULL DEFAULT now(),
        UNIQUE (version_id, number)
      )`);
    await sql(`
      CREATE TABLE documents (
        id uuid PRIMARY KEY,
        version_id uuid NOT NULL REFERENCES versions,
        number integer NOT NULL,
        file_name text NOT NULL,
        content bytea NOT NULL,
        size integer NOT NULL,
        pages integer NOT NULL,
        sha256 text NOT NULL CHECK (sha256 ~ '^[0-9a-f]{64}$'),
        evidence_sha256 text NOT NULL,
        record_head text NOT NULL,
        run_id uuid NOT NULL,
        made_at timestamptz NOT NULL DEFAULT now(),
        made_by uuid NOT NULL REFERENCES people,
        UNIQUE (version_id, number)
      )`);
    await sql('ALTER TABLE documents ALTER COLUMN content SET STORAGE EXTERNAL');
    await sql(`GRANT SELECT, INSERT ON versions, version_acts, evidence, documents TO ${app}`);
    // The author's texts stay open until the second signature.
    await sql(`GRANT SELECT, INSERT, UPDATE ON version_texts TO ${app}`);
  },
};
