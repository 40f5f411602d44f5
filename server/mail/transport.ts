import { createTransport } from 'nodemailer';
import { log } from '../log.ts';
import { MailMessage } from '../models/MailMessage.ts';

export interface MailTransport {
  /** Sends what waits; resolves with the number sent. */
  flush: () => Promise<number>;
  close: () => void;
}

/** Sends the outbox over SMTP, or leaves it there when no server is named: nothing leaves the machine by itself. */
export function makeTransport(options: { smtpUrl: string; from: string }): MailTransport {
  if (options.smtpUrl === '') return { flush: () => Promise.resolve(0), close: () => undefined };
  const smtp = createTransport(options.smtpUrl);
  return {
    close: () => smtp.close(),
    async flush() {
      const waiting = await MailMessage.query().where({ state: 'outbox' }).orderBy('createdAt').limit(20);
      let sent = 0;
      for (const message of waiting) {
        try {
          await smtp.sendMail({ from: options.from, to: { name: message.toName, address: message.toAddress }, subject: message.subject, text: message.bodyText });
          await message.$query().patch({ state: 'sent', sentAt: new Date(), error: null });
          sent += 1;
        } catch (error) {
          await message.$query().patch({ state: 'failed', error: error instanceof Error ? error.message : String(error) });
          log.error('mail failed', error, { kind: message.kind });
        }
      }
      return sent;
    },
  };
}
