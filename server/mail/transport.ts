import { createTransport, type Transporter } from 'nodemailer';
import { log } from '../log.ts';
import { MailMessage } from '../models/MailMessage.ts';

export interface MailTransport {
  /** Sends what waits; resolves with the number sent. */
  flush: (now: Date) => Promise<number>;
  close: () => void;
}

/** A server that cannot take mail just now is left alone for a while. */
const restMs = 60_000;
/** A day of trying is what a link in a mail is worth waiting for; then somebody must be told. */
const triedForMs = 24 * 3_600_000;

/**
 * Sends the outbox over SMTP, or leaves it there when no server is named: nothing leaves the machine by itself. A flush
 * that is asked for while one is under way is that one, so that a slow mail server gets no message twice.
 */
export function makeTransport(options: { smtpUrl: string; from: string }): MailTransport {
  if (options.smtpUrl === '') return { flush: () => Promise.resolve(0), close: () => undefined };
  const smtp = createTransport(options.smtpUrl);
  let underWay: Promise<number> | null = null;
  let restUntil = 0;
  const send = async (now: Date) => {
    const { sent, mustRest } = await sendOutbox(smtp, options.from, now);
    if (mustRest) restUntil = now.getTime() + restMs;
    return sent;
  };
  return {
    close: () => smtp.close(),
    flush: (now) => {
      if (underWay === null && now.getTime() < restUntil) return Promise.resolve(0);
      return (underWay ??= send(now).finally(() => (underWay = null)));
    },
  };
}

async function sendOutbox(smtp: Transporter, from: string, now: Date): Promise<{ sent: number; mustRest: boolean }> {
  const waiting = await MailMessage.query().where({ state: 'outbox' }).orderBy('createdAt').limit(20);
  let sent = 0;
  let mustRest = false;
  for (const message of waiting) {
    try {
      await smtp.sendMail({ from, to: { name: message.toName, address: message.toAddress }, subject: message.subject, text: message.bodyText });
      await message.$query().patch({ state: 'sent', sentAt: new Date(), error: null });
      sent += 1;
    } catch (error) {
      log.error('mail failed', error, { kind: message.kind });
      const fault = faultOf(error);
      const isGivenUp = fault === 'refused' || now.getTime() - message.createdAt.getTime() > triedForMs;
      await message.$query().patch({ state: isGivenUp ? 'failed' : 'outbox', error: error instanceof Error ? error.message : String(error) });
      mustRest ||= fault !== 'refused';
      if (fault === 'unreachable') break;
    }
  }
  return { sent, mustRest };
}

/**
 * Replies of 5xx are final, of 4xx are not (RFC 5321 §4.2.1). Without a reply, or when it would not let us in, the server
 * takes no message at all; the address itself is only at fault where the library says so.
 */
function faultOf(error: unknown): 'refused' | 'later' | 'unreachable' {
  const { code, responseCode } = error as { code?: string; responseCode?: number };
  if (code === 'EAUTH') return 'unreachable';
  if (responseCode === undefined) return code === 'EENVELOPE' ? 'refused' : 'unreachable';
  return responseCode >= 500 ? 'refused' : 'later';
}
