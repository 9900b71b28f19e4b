import type { Migration } from './migration';

export const mail: Migration = {
  name: '0006-mail',
  async up({ sql, app }) {
    await sql(`
      CREATE TABLE mail_outbox (
        id uuid PRIMARY KEY DEFAULT gen_random_uuid(),
        recipient text NOT NULL,
        subject text NOT NULL,
        body text,
        state text NOT NULL DEFAULT 'waiting' CHECK (state IN ('waiting', 'sent', 'failed')),
        problem text,
        created_at timestamptz NOT NULL DEFAULT now(),
        sent_at timestamptz
      )`);
    await sql('ALTER TABLE invitations ADD FOREIGN KEY (mail_id) REFERENCES mail_outbox');
    await sql(`GRANT SELECT, INSERT, UPDATE ON mail_outbox TO ${app}`);
  },
};
