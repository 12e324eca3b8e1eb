import { createTransport, type Transporter } from 'nodemailer';
import { SMTPServer } from 'smtp-server';
import { type AddressInfo } from 'node:net';

export interface OutgoingMail {
  to: string;
  subject: string;
  text: string;
}

/** Carries mails to a mail server. */
export interface MailCarrier {
  /** Rejects when the server does not take it. */
  send(mail: OutgoingMail): Promise<void>;
  close(): Promise<void>;
}

const TIMEOUTS = { connectionTimeout: 10_000, greetingTimeout: 10_000, socketTimeout: 30_000 };

function carrier(transport: Transporter, from: string, whenClosed: () => Promise<void>): MailCarrier {
  return {
    send: async ({ to, subject, text }) => {
      await transport.sendMail({ from, to, subject, text });
    },
    close: async () => {
      transport.close();
      await whenClosed();
    },
  };
}

/** A carrier to the operator's own mail server. `url` as in HALFDEEP_SMTP_URL; `from` is taken from its `?from=`. */
export function smtpCarrier(url: string): MailCarrier {
  const address = new URL(url);
  const from = address.searchParams.get('from') ?? `Halfdeep <no-reply@${address.hostname}>`;
  address.searchParams.delete('from');
  const transport = createTransport({ url: address.href, ...TIMEOUTS });
  return carrier(transport, from, () => Promise.resolve());
}

/** What the local server took, newest last. */
export interface LocalCarrier extends MailCarrier {
  readonly taken: readonly string[];
}

/**
 * A mail server in this process, on a port of the loopback interface that nobody else knows: every step of sending is
 * real, and nothing leaves the machine. It keeps the last hundred messages in memory, as they arrived.
 */
export async function localCarrier(): Promise<LocalCarrier> {
  const taken: string[] = [];
  const server = new SMTPServer({
    authOptional: true,
    disabledCommands: ['AUTH', 'STARTTLS'],
    onData: (stream, _session, done) => {
      const chunks: Buffer[] = [];
      stream.on('data', (chunk: Buffer) => chunks.push(chunk));
      stream.on('end', () => {
        taken.push(Buffer.concat(chunks).toString('utf8'));
        if (taken.length > 100) taken.shift();
        done();
      });
    },
  });
  await new Promise<void>((resolve, reject) => {
    server.on('error', reject);
    server.listen(0, '127.0.0.1', resolve);
  });
  const { port } = server.server.address() as AddressInfo;
  // Not pooled: a closed connection at the other end is then no failure of the next mail.
  const transport = createTransport({ host: '127.0.0.1', port, secure: false, ignoreTLS: true, ...TIMEOUTS });
  const close = () => new Promise<void>((resolve) => server.close(() => resolve()));
  return { ...carrier(transport, 'Halfdeep <no-reply@halfdeep.example>', close), taken };
}
