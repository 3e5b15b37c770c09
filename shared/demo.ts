/**
 * The password of every demo account. It is no secret: demo accounts exist on loopback only, the sign-in page lists them,
 * and the server refuses to listen anywhere else while they exist.
 */
export const DEMO_PASSWORD = 'lanthorn-demo'
