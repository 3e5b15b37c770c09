/** Whether the start command's catcher takes every message, because no mail server is set. */
export const isMailCaught = (): boolean => process.env.LANTHORN_MAIL_CAUGHT === '1'

/** The address this process listens on. Nitro without a host listens on every one, so none named counts as all. */
export const listenHost = (): string => process.env.NITRO_HOST || process.env.HOST || '0.0.0.0'

export function isLoopback(host: string): boolean {
  return host === 'localhost' || host === '::1' || /^127(\.\d{1,3}){3}$/.test(host)
}
