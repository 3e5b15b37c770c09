/** What the person at the keyboard needs once everything runs. */
export function banner({ address, demoAccounts, firstAdministratorLink, mailFolder }) {
  const lines = ['', `Lanthorn is ready on ${address}`]
  if (demoAccounts.length > 0) {
    const widths = ['email', 'password'].map(key => Math.max(...demoAccounts.map(account => account[key].length)))
    lines.push('', 'Demo accounts (invented people, loopback only):')
    for (const { email, password, roles } of demoAccounts) lines.push(`  ${email.padEnd(widths[0])}  ${password.padEnd(widths[1])}  ${roles.join(', ')}`)
  }
  if (firstAdministratorLink !== null) lines.push('', `Nobody has an account yet. This link makes the first administrator, once: ${firstAdministratorLink}`)
  if (mailFolder !== null) lines.push('', `No SMTP_URL is set: mail is kept as files in ${mailFolder}`)
  return [...lines, '', 'Ctrl-C stops it.', ''].join('\n')
}
