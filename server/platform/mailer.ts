import nodemailer from 'nodemailer'

export interface OutgoingMail { to: string, subject: string, body: string, id: string }
export interface Mailer {
  /** @returns the message id @throws what the mail server or the network said */
  send: (mail: OutgoingMail) => Promise<string>
  close: () => void
}

/** Mail through any SMTP server; npm start runs a catcher on loopback where none is set. */
export function smtpMailer(url: string, from: string): Mailer {
  const transport = nodemailer.createTransport(url, { from, disableFileAccess: true, disableUrlAccess: true })
  return {
    async send(mail) {
      // The message id is made from ours, so that a mail sent twice after a crash can be told as one.
      const info = await transport.sendMail({ to: mail.to, subject: mail.subject, text: mail.body, messageId: `<${mail.id}@lanthorn>` })
      return info.messageId
    },
    close: () => transport.close(),
  }
}
