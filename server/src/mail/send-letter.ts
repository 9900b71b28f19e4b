import { createTransport } from 'nodemailer';
import type { Context } from '../context';

/**
 * Sends one letter of the outbox. What fails is thrown, and the queue tries again later; what was sent loses its body, because it may hold
 * a link that opens an account.
 */
export async function sendLetter({ pool, config, log }: Context, mailId: string): Promise<void> {
  const { rows } = await pool.query<{ recipient: string; subject: string; body: string }>(
    `SELECT recipient, subject, body FROM mail_outbox WHERE id = $1 AND state <> 'sent' AND body IS NOT NULL`,
    [mailId],
  );
  const letter = rows[0];
  if (!letter) return;
  const { host, port, secure, user, password, from } = config.mail;
  try {
    if (host === null) throw new Error('No mail server is configured (MAIL_HOST)');
    const transport = createTransport({
      host,
      port,
      secure,
      auth: user === null ? undefined : { user, pass: password ?? '' },
      connectionTimeout: 10_000,
      socketTimeout: 20_000,
    });
    // The same id at every try, so that a mail server can tell a second delivery from a second letter.
    await transport.sendMail({
      from,
      to: letter.recipient,
      subject: letter.subject,
      text: letter.body,
      messageId: `<${mailId}@tallystone>`,
    });
    transport.close();
  } catch (error) {
    const message = error instanceof Error ? error.message : String(error);
    await pool.query(`UPDATE mail_outbox SET state = 'failed', problem = $2 WHERE id = $1`, [mailId, message]);
    log.warn({ mailId, problem: message }, 'a letter was not sent; it will be tried again');
    throw error;
  }
  await pool.query(`UPDATE mail_outbox SET state = 'sent', sent_at = now(), body = NULL, problem = NULL WHERE id = $1`, [mailId]);
}
