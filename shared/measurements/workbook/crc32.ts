const TABLE = Uint32Array.from({ length: 256 }, (_, index) => {
  let value = index
  for (let bit = 0; bit < 8; bit++) value = value & 1 ? 0xEDB88320 ^ (value >>> 1) : value >>> 1
  return value >>> 0
})

/** CRC-32 of an archive's entry, unsigned (ISO 3309, polynomial 0xEDB88320 reflected). */
export function crc32(bytes: Uint8Array): number {
  let value = 0xFFFFFFFF
  for (const byte of bytes) value = (TABLE[(value ^ byte) & 0xFF] ?? 0) ^ (value >>> 8)
  return (value ^ 0xFFFFFFFF) >>> 0
}
