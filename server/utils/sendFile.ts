import { setResponseHeader, type H3Event } from 'h3'

/**
 * Answers with a file to keep, never to show: people upload what they like, and a browser that opened it as a page would run what is inside.
 * The name goes in UTF-8 form (RFC 8187), so that no character of it can end the header.
 */
export function sendFile(event: H3Event, { fileName, bytes }: { fileName: string, bytes: Uint8Array }): Uint8Array {
  setResponseHeader(event, 'Content-Type', 'application/octet-stream')
  setResponseHeader(event, 'Content-Disposition', `attachment; filename*=UTF-8''${encodeURIComponent(fileName).replace(/['()*]/g, sign => `%${sign.charCodeAt(0).toString(16).toUpperCase()}`)}`)
  setResponseHeader(event, 'Content-Security-Policy', 'sandbox; default-src \'none\'')
  setResponseHeader(event, 'X-Content-Type-Options', 'nosniff')
  setResponseHeader(event, 'Cache-Control', 'private, no-store')
  return Buffer.from(bytes)
}
