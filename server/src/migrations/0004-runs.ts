import type { Migration } from './migration';

export const runs: Migration = {
  name: '0004-runs',
  async up({ sql, app }) {
    await sql(`
      CREATE TABLE runs (
        id uuid PRIMARY KEY DEFAULT gen_random_uuid(),
        kind text NOT NULL,
        queue text NOT NULL,
        payload jsonb NOT NULL,
        state text NOT NULL DEFAULT 'queued' CHECK (state IN ('queued', 'running', 'cancelling', 'succeeded', 'failed', 'cancelled')),
        phase text,
        share double precision CHECK (share BETWEEN 0 AND 1),
        attempt integer NOT NULL DEFAULT 0,
        most_attempts integer NOT NULL,
        person_id uuid NOT NULL REFERENCES people,
        model_id uuid,
        entity text,
        entity_id text,
        singleton text,
        job_id uuid,
        request_id text,
        result jsonb,
        problem jsonb,
        created_at timestamptz NOT NULL DEFAULT now(),
        queued_at timestamptz NOT NULL DEFAULT now(),
        started_at timestamptz,
        ended_at timestamptz
      )`);
    await sql(`CREATE UNIQUE INDEX runs_singleton ON runs (kind, singleton) WHERE state IN ('queued', 'running', 'cancelling')`);
    await sql('CREATE INDEX runs_person ON runs (person_id, created_at DESC)');
    await sql('CREATE INDEX runs_model ON runs (model_id, created_at DESC)');
    await sql('CREATE INDEX runs_entity ON runs (entity, entity_id)');
    await sql(`CREATE INDEX runs_active ON runs (state) WHERE state IN ('queued', 'running', 'cancelling')`);
    await sql(`
      CREATE TABLE run_attempts (
        run_id uuid NOT NULL REFERENCES runs ON DELETE CASCADE,
        number integer NOT NULL,
        worker text NOT NULL,
        started_at timestamptz NOT NULL DEFAULT clock_timestamp(),
        heartbeat_at timestamptz NOT NULL DEFAULT clock_timestamp(),
        ended_at timestamptz,
        outcome text CHECK (outcome IN ('succeeded', 'failed', 'cancelled', 'lost', 'released')),
        PRIMARY KEY (run_id, number)
      )`);
    await sql('CREATE INDEX run_attempts_open ON run_attempts (heartbeat_at) WHERE ended_at IS NULL');
    await sql(`
      CREATE TABLE run_events (
        id bigint GENERATED ALWAYS AS IDENTITY PRIMARY KEY,
        run_id uuid NOT NULL REFERENCES runs ON DELETE CASCADE,
        person_id uuid NOT NULL REFERENCES people,
        data jsonb NOT NULL,
        at timestamptz NOT NULL DEFAULT clock_timestamp()
      )`);
    await sql('CREATE INDEX run_events_person ON run_events (person_id, id)');
    await sql('CREATE INDEX run_events_run ON run_events (run_id)');
    await sql(`
      CREATE TABLE idempotency_keys (
        person_id uuid NOT NULL REFERENCES people,
        route text NOT NULL,
        key text NOT NULL,
        body_hash text NOT NULL,
        answer jsonb,
        created_at timestamptz NOT NULL DEFAULT now(),
        PRIMARY KEY (person_id, route, key)
      )`);
    await sql('CREATE INDEX idempotency_keys_created ON idempotency_keys (created_at)');
    await sql(`GRANT SELECT, INSERT, UPDATE ON runs, run_attempts TO ${app}`);
    await sql(`GRANT SELECT, INSERT, DELETE ON run_events TO ${app}`);
    await sql(`GRANT SELECT, INSERT, UPDATE, DELETE ON idempotency_keys TO ${app}`);
  },
};
