import type { Migration } from './migration';

export const samples: Migration = {
  name: '0101-samples',
  async up({ sql, app }) {
    // A raw file is an upload until completed_at is set, in the transaction that stores its last chunk and makes its sample.
    await sql(`
      CREATE TABLE raw_files (
        id uuid PRIMARY KEY,
        model_id uuid NOT NULL REFERENCES models,
        person_id uuid NOT NULL REFERENCES people,
        file_name text NOT NULL,
        size bigint NOT NULL CHECK (size > 0),
        received bigint NOT NULL DEFAULT 0 CHECK (received BETWEEN 0 AND size),
        sha256 text CHECK (sha256 ~ '^[0-9a-f]{64}$'),
        started_at timestamptz NOT NULL DEFAULT now(),
        seen_at timestamptz NOT NULL DEFAULT now(),
        completed_at timestamptz,
        CHECK ((completed_at IS NULL) = (sha256 IS NULL)),
        CHECK (completed_at IS NULL OR received = size)
      )`);
    await sql('CREATE INDEX raw_files_unfinished ON raw_files (model_id, person_id) WHERE completed_at IS NULL');
    await sql(`
      CREATE TABLE raw_chunks (
        file_id uuid NOT NULL REFERENCES raw_files ON DELETE CASCADE,
        sequence integer NOT NULL,
        start bigint NOT NULL,
        length integer NOT NULL CHECK (length > 0),
        content bytea NOT NULL,
        PRIMARY KEY (file_id, sequence)
      )`);
    // Compressed and encrypted already: PostgreSQL's own compression would cost time for nothing.
    await sql('ALTER TABLE raw_chunks ALTER COLUMN content SET STORAGE EXTERNAL');
    await sql(`
      CREATE TABLE samples (
        id uuid PRIMARY KEY DEFAULT gen_random_uuid(),
        model_id uuid NOT NULL REFERENCES models,
        number integer NOT NULL,
        raw_file_id uuid NOT NULL UNIQUE REFERENCES raw_files,
        file_name text NOT NULL,
        size bigint NOT NULL,
        sha256 text NOT NULL,
        reading jsonb,
        reading_id uuid,
        rows integer,
        columns integer,
        duplicate_rows integer,
        problems jsonb NOT NULL DEFAULT '[]',
        received_at timestamptz NOT NULL DEFAULT now(),
        received_by uuid NOT NULL REFERENCES people,
        UNIQUE (model_id, number)
      )`);
    // What one attempt at reading stores hangs on its own reading; the sample points to the one that came through.
    await sql(`
      CREATE TABLE sample_readings (
        id uuid PRIMARY KEY,
        sample_id uuid NOT NULL REFERENCES samples ON DELETE CASCADE,
        run_id uuid NOT NULL,
        attempt integer NOT NULL,
        started_at timestamptz NOT NULL DEFAULT now()
      )`);
    await sql('CREATE INDEX sample_readings_sample ON sample_readings (sample_id)');
    await sql(`
      CREATE TABLE sample_columns (
        reading_id uuid NOT NULL REFERENCES sample_readings ON DELETE CASCADE,
        position integer NOT NULL,
        name text NOT NULL,
        kind text NOT NULL CHECK (kind IN ('numeric', 'categorical', 'date')),
        hashed boolean NOT NULL,
        profile jsonb NOT NULL,
        PRIMARY KEY (reading_id, position),
        UNIQUE (reading_id, name)
      )`);
    await sql(`
      CREATE TABLE column_segments (
        reading_id uuid NOT NULL REFERENCES sample_readings ON DELETE CASCADE,
        position integer NOT NULL,
        segment integer NOT NULL,
        rows integer NOT NULL CHECK (rows BETWEEN 1 AND 65536),
        content bytea NOT NULL,
        PRIMARY KEY (reading_id, position, segment)
      )`);
    await sql('ALTER TABLE column_segments ALTER COLUMN content SET STORAGE EXTERNAL');
    await sql(`
      CREATE TABLE sample_drafts (
        sample_id uuid PRIMARY KEY REFERENCES samples ON DELETE CASCADE,
        content jsonb NOT NULL,
        revision integer NOT NULL DEFAULT 1,
        saved_at timestamptz NOT NULL DEFAULT now(),
        saved_by uuid NOT NULL REFERENCES people
      )`);
    await sql(`
      CREATE TABLE sample_definitions (
        id uuid PRIMARY KEY,
        sample_id uuid NOT NULL REFERENCES samples,
        model_id uuid NOT NULL REFERENCES models,
        number integer NOT NULL,
        content jsonb NOT NULL,
        counts jsonb NOT NULL,
        sha256 text NOT NULL CHECK (sha256 ~ '^[0-9a-f]{64}$'),
        created_at timestamptz NOT NULL DEFAULT now(),
        created_by uuid NOT NULL REFERENCES people,
        UNIQUE (sample_id, number)
      )`);
    await sql('CREATE INDEX sample_definitions_model ON sample_definitions (model_id)');
    await sql(`
      CREATE TABLE definition_segments (
        definition_id uuid NOT NULL REFERENCES sample_definitions,
        what text NOT NULL CHECK (what IN ('partition', 'outcome', 'exclusion', 'weight')),
        segment integer NOT NULL,
        rows integer NOT NULL CHECK (rows BETWEEN 1 AND 65536),
        content bytea NOT NULL,
        PRIMARY KEY (definition_id, what, segment)
      )`);
    await sql(`GRANT SELECT, INSERT, UPDATE, DELETE ON raw_files, samples, sample_drafts TO ${app}`);
    await sql(`GRANT SELECT, INSERT, DELETE ON raw_chunks, sample_readings, sample_columns, column_segments TO ${app}`);
    // A confirmed definition never changes: what was built on it refers to it.
    await sql(`GRANT SELECT, INSERT ON sample_definitions, definition_segments TO ${app}`);
  },
};
