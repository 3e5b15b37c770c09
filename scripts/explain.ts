const UNREACHABLE = new Set(['ECONNREFUSED', 'ENOTFOUND', 'ETIMEDOUT', 'EHOSTUNREACH', 'ENETUNREACH', 'EAI_AGAIN', 'ECONNRESET'])
/** Access denied for the account, for the account on this schema, and host not allowed. */
const REFUSED = new Set([1045, 1044, 1130, 1698])
const NO_SUCH_SCHEMA = 1049

/** One line on what is wrong with a database connection and what to do; passwords never appear in it. */
export function explain(error: unknown, { name, url }: { name: string, url: string }): string {
  const { host, username, pathname } = new URL(url)
  const schema = pathname.slice(1)
  const { code, errno, message } = error as { code?: string, errno?: number, message?: string }
  if (code !== undefined && UNREACHABLE.has(code)) return `No database answers at ${host} (${code}). Start it, or correct ${name}.`
  if (errno === NO_SUCH_SCHEMA) return `The database server at ${host} has no schema "${schema}". Create it with: CREATE DATABASE ${schema} CHARACTER SET utf8mb4 COLLATE utf8mb4_bin`
  if (errno !== undefined && REFUSED.has(errno)) return `The database server at ${host} refuses the account "${decodeURIComponent(username)}" on "${schema}". Check its name, password, host and rights in ${name}.`
  return `The database at ${host} could not be brought up to date: ${message ?? String(error)}`
}
