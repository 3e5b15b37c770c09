import { randomBytes } from 'node:crypto'
import { mkdirSync, renameSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { simpleParser } from 'mailparser'
import { SMTPServer } from 'smtp-server'

// Stands in for a mail server where none is set: takes every message on loopback and keeps it as two files,
// the message as it came (.eml) and what a reader wants of it (.json). Nothing leaves the machine.
const [port, folder] = process.argv.slice(2)
mkdirSync(folder, { recursive: true, mode: 0o700 })

async function keep(stream, envelope) {
  const pieces = []
  for await (const piece of stream) pieces.push(piece)
  const raw = Buffer.concat(pieces)
  const message = await simpleParser(raw)
  const receivedAt = new Date().toISOString()
  const name = `${receivedAt.replaceAll(/[:.]/g, '-')}-${randomBytes(4).toString('hex')}`
  write(`${name}.eml`, raw)
  write(`${name}.json`, `${JSON.stringify({
    receivedAt, from: envelope.mailFrom ? envelope.mailFrom.address : null, to: envelope.rcptTo.map(recipient => recipient.address),
    messageId: message.messageId ?? null, subject: message.subject ?? '', text: message.text ?? '', html: message.html || null,
  }, null, 2)}\n`)
}

/** Under another name first: whoever watches the folder never reads half a message. */
function write(name, content) {
  const beside = join(folder, `.${name}.part`)
  writeFileSync(beside, content, { mode: 0o600 })
  renameSync(beside, join(folder, name))
}

const server = new SMTPServer({
  authOptional: true, disabledCommands: ['STARTTLS', 'AUTH'], disableReverseLookup: true, logger: false, size: 25 * 1024 * 1024,
  onData: (stream, session, done) => keep(stream, session.envelope).then(() => done(), done),
})
server.on('error', (error) => {
  console.error(error.message)
  // A sender that hangs up in the middle is no reason to end; a port that cannot be had is.
  if (!server.server.listening) process.exit(1)
})
server.listen(Number(port), '127.0.0.1')
for (const signal of ['SIGTERM', 'SIGINT']) process.once(signal, () => server.close(() => process.exit(0)))
