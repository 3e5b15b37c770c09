import { Hash } from '@adonisjs/hash'
import { Scrypt } from '@adonisjs/hash/drivers/scrypt'

export interface Passwords {
  hash: (plain: string) => Promise<string>
  verify: (hashed: string, plain: string) => Promise<boolean>
  needsRehash: (hashed: string) => boolean
}

/**
 * scrypt in PHC form, through the same package and driver that nuxt-auth-utils uses, so that hashes made by the server,
 * by the start script and by tests are one kind. cost 2^14, block 8: tests pass a lower cost.
 */
export function scryptPasswords(cost = 16_384): Passwords {
  const hash = new Hash(new Scrypt({ cost }))
  return {
    hash: plain => hash.make(plain),
    verify: (hashed, plain) => hash.verify(hashed, plain),
    needsRehash: hashed => hash.needsReHash(hashed),
  }
}
