import type { Migration } from './migration';

export const record: Migration = {
  name: '0003-record',
  async up({ sql, app }) {
    // Sequence and previous hash are unique, so that two chains cannot grow beside each other even from a faulty writer.
    await sql(`
      CREATE TABLE record (
        sequence bigint PRIMARY KEY CHECK (sequence > 0),
        at timestamptz NOT NULL,
        actor_id uuid,
        actor_name text NOT NULL,
        actor_roles text[] NOT NULL,
        action text NOT NULL,
        entity text NOT NULL,
        entity_id text,
        model_id uuid,
        before jsonb,
        after jsonb,
        detail jsonb,
        reason text,
        previous_hash text NOT NULL UNIQUE CHECK (previous_hash ~ '^[0-9a-f]{64}$'),
        hash text NOT NULL UNIQUE CHECK (hash ~ '^[0-9a-f]{64}$')
      )`);
    await sql('CREATE INDEX record_model ON record (model_id, sequence DESC) WHERE model_id IS NOT NULL');
    await sql('CREATE INDEX record_actor ON record (actor_id, sequence DESC)');
    await sql('CREATE INDEX record_action ON record (action, sequence DESC)');
    await sql('CREATE INDEX record_entity ON record (entity, entity_id, sequence DESC)');
    // Read and append: neither UPDATE nor DELETE nor TRUNCATE.
    await sql(`GRANT SELECT, INSERT ON record TO ${app}`);
  },
};
