/** Something the person at the keyboard can put right: shown as one line, without a stack. */
export class Failure extends Error {}

/** Runs a command's main function; a Failure becomes one line and exit code 1, anything else keeps its stack. */
export async function runMain(main) {
  try {
    await main()
  }
  catch (error) {
    console.error(error instanceof Failure ? error.message : error)
    process.exitCode = 1
  }
}
