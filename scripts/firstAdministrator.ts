import { makeFirstAdministratorLink } from '../server/services/firstAdministrator'
import { closeDeps, useDeps } from '../server/utils/deps'

// Prints { link } as JSON: a one-time link that makes the first administrator, or null when somebody has an account.
try {
  console.log(JSON.stringify({ link: await makeFirstAdministratorLink(useDeps()) }))
}
finally {
  await closeDeps()
}
