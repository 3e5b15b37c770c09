/** One line of progress for the person at the keyboard. */
export function say(line) {
  process.stdout.write(`${line}\n`)
}
