import type { Migration } from './migration';

export const people: Migration = {
  name: '0001-people',
  async up({ sql, app }) {
    await sql(`
      CREATE TABLE people (
        id uuid PRIMARY KEY DEFAULT gen_random_uuid(),
        name text NOT NULL,
        email text NOT NULL UNIQUE CHECK (email = lower(email)),
        password_hash text NOT NULL,
        state text NOT NULL DEFAULT 'active' CHECK (state IN ('active', 'disabled')),
        revision integer NOT NULL DEFAULT 1,
        created_at timestamptz NOT NULL DEFAULT now(),
        last_sign_in_at timestamptz
      )`);
    await sql(`
      CREATE TABLE person_roles (
        person_id uuid NOT NULL REFERENCES people,
        role text NOT NULL CHECK (role IN ('modeller', 'validator', 'compliance', 'admin', 'auditor')),
        given_at timestamptz NOT NULL DEFAULT now(),
        PRIMARY KEY (person_id, role)
      )`);
    await sql(`
      CREATE TABLE invitations (
        id uuid PRIMARY KEY DEFAULT gen_random_uuid(),
        name text NOT NULL,
        email text NOT NULL,
        roles text[] NOT NULL,
        token_hash bytea NOT NULL UNIQUE,
        invited_by uuid NOT NULL REFERENCES people,
        mail_id uuid NOT NULL,
        created_at timestamptz NOT NULL DEFAULT now(),
        expires_at timestamptz NOT NULL,
        accepted_at timestamptz,
        withdrawn_at timestamptz
      )`);
    await sql(`
      CREATE TABLE setup_tokens (
        token_hash bytea PRIMARY KEY,
        created_at timestamptz NOT NULL DEFAULT now(),
        used_at timestamptz
      )`);
    // Who works on which model: decides whose history a modeller may read. The models themselves refer to it from their own migration.
    await sql(`
      CREATE TABLE model_members (
        model_id uuid NOT NULL,
        person_id uuid NOT NULL REFERENCES people,
        added_at timestamptz NOT NULL DEFAULT now(),
        PRIMARY KEY (model_id, person_id)
      )`);
    await sql('CREATE INDEX model_members_person ON model_members (person_id)');
    // People are never deleted: the record names them.
    await sql(`GRANT SELECT, INSERT, UPDATE ON people, invitations, setup_tokens TO ${app}`);
    await sql(`GRANT SELECT, INSERT, DELETE ON person_roles, model_members TO ${app}`);
  },
};
