import type { AddressInfo } from 'node:net';
import { SMTPServer } from 'smtp-server';

/** A letter as it came over the wire. */
export interface ReceivedLetter {
	from: string;
	to: string[];
	/** headers and body, undecoded */
	raw: string;
}

export interface TestMailServer {
	/** for `KERBNOTE_SMTP_URL` */
	url: string;
	letters: ReceivedLetter[];
	/** what the server answers to the next letters; null: it takes them */
	refuse: { at: 'recipient' | 'data'; code: number; text: string } | null;
	close: () => Promise<void>;
}

/** A mail server on loopback that speaks SMTP and keeps what it gets. */
export async function startMailServer(): Promise<TestMailServer> {
	const box: TestMailServer = { url: '', letters: [], refuse: null, close: async () => {} };
	const refusal = (at: 'recipient' | 'data') =>
		box.refuse?.at === at ? Object.assign(new Error(box.refuse.text), { responseCode: box.refuse.code }) : null;
	const server = new SMTPServer({
		authOptional: true,
		disabledCommands: ['STARTTLS', 'AUTH'],
		onRcptTo: (_address, _session, done) => done(refusal('recipient')),
		onData: (stream, session, done) => {
			const chunks: Buffer[] = [];
			stream.on('data', (chunk: Buffer) => chunks.push(chunk));
			stream.on('end', () => {
				const refused = refusal('data');
				if (refused) return done(refused);
				box.letters.push({
					from: session.envelope.mailFrom ? session.envelope.mailFrom.address : '',
					to: session.envelope.rcptTo.map(({ address }) => address),
					raw: Buffer.concat(chunks).toString('utf8')
				});
				done();
			});
		}
	});
	await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
	const { port } = server.server.address() as AddressInfo;
	box.url = `smtp://127.0.0.1:${port}`;
	box.close = () => new Promise((resolve) => server.close(resolve));
	return box;
}

/** Headers of a letter, folded lines joined, by name in lower case. */
export function headersOf({ raw }: ReceivedLetter): Map<string, string> {
	const [head] = raw.split('\r\n\r\n', 1);
	const lines = head.replaceAll(/\r\n[ \t]+/g, ' ').split('\r\n');
	return new Map(
		lines.map((line) => {
			const at = line.indexOf(':');
			return [line.slice(0, at).toLowerCase(), line.slice(at + 1).trim()];
		})
	);
}

/** The plain part, decoded from quoted-printable (RFC 2045, 6.7) or base64. */
export function textOf({ raw }: ReceivedLetter): string {
	const part = raw.split(/\r\n--[^\r\n]+/).find((piece) => /content-type: text\/plain/i.test(piece)) ?? '';
	const body = part.slice(part.indexOf('\r\n\r\n') + 4);
	if (/content-transfer-encoding: base64/i.test(part)) return Buffer.from(body, 'base64').toString('utf8');
	if (!/content-transfer-encoding: quoted-printable/i.test(part)) return body;
	const bytes = body
		.replaceAll(/=\r\n/g, '')
		.replaceAll(/=([0-9A-F]{2})/gi, (_all, hex: string) => String.fromCharCode(Number.parseInt(hex, 16)));
	return Buffer.from(bytes, 'latin1').toString('utf8');
}
