declare module '#auth-utils' {
  /** The sealed cookie holds nothing but the id of a session row; everything else is read from the database on each request. */
  interface SecureSessionData { sessionId: string }
}
export {}
