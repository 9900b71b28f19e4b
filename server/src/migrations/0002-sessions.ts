import type { Migration } from './migration';

export const sessions: Migration = {
  name: '0002-sessions',
  async up({ sql, app }) {
    // The columns sid, sess, expire are those of connect-pg-simple. The generated ones let sessions be found by person; the two times come
    // from the database's clock, because deadlines must hold on a server whose own clock is off.
    await sql(`
      CREATE TABLE session (
        sid varchar PRIMARY KEY,
        sess json NOT NULL,
        expire timestamp(6) with time zone NOT NULL,
        person_id uuid GENERATED ALWAYS AS ((sess #>> '{passport,user}')::uuid) STORED,
        public_id uuid GENERATED ALWAYS AS ((sess ->> 'publicId')::uuid) STORED,
        started_at timestamptz NOT NULL DEFAULT now(),
        seen_at timestamptz NOT NULL DEFAULT now()
      )`);
    await sql('CREATE INDEX session_expire ON session (expire)');
    await sql('CREATE INDEX session_person ON session (person_id)');
    await sql(`
      CREATE FUNCTION session_seen() RETURNS trigger LANGUAGE plpgsql AS $$
      BEGIN NEW.seen_at := clock_timestamp(); RETURN NEW; END $$`);
    await sql('CREATE TRIGGER session_seen BEFORE UPDATE ON session FOR EACH ROW EXECUTE FUNCTION session_seen()');
    await sql(`
      CREATE TABLE sign_in_failures (
        id bigint GENERATED ALWAYS AS IDENTITY PRIMARY KEY,
        account bytea NOT NULL,
        address text NOT NULL,
        at timestamptz NOT NULL DEFAULT clock_timestamp()
      )`);
    await sql('CREATE INDEX sign_in_failures_account ON sign_in_failures (account, at)');
    await sql('CREATE INDEX sign_in_failures_address ON sign_in_failures (address, at)');
    await sql(`GRANT SELECT, INSERT, UPDATE, DELETE ON session TO ${app}`);
    await sql(`GRANT SELECT, INSERT, DELETE ON sign_in_failures TO ${app}`);
  },
};
