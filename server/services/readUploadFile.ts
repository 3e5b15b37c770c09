import { AppError } from '../../shared/errors'
import type { Actor, Scope } from '../../shared/permissions'
import type { Deps } from '../platform/deps'
import { sha256 } from '../platform/hashes'
import { findStaged, findUpload } from '../queries/uploads'
import { seesFiles } from './showSeries'
import { UPLOAD_NOT_FOUND } from './uploadReading'

export interface ReadFileInput { actor: Actor, programmeId: string, scope: Scope, id: string }

/**
 * The very bytes that were uploaded, checked against their hash. Stored files are open to the programme's staff, and to partners where the lead opened files
 * and a number of that file is signed; a staged one is its owner's.
 */
export async function readUploadFile(deps: Pick<Deps, 'db' | 'storage'>, { actor, programmeId, scope, id }: ReadFileInput): Promise<{ fileName: string, bytes: Uint8Array }> {
  const mayAsk = await seesFiles(deps, programmeId, scope)
  const upload = mayAsk
    ? await findUpload(deps.db, { programmeId, id, signedOnly: scope === 'signed' }) ?? await findStaged(deps.db, { programmeId, personId: actor.personId, id })
    : null
  if (!upload) throw new AppError('notFound', UPLOAD_NOT_FOUND)
  const bytes = await deps.storage.get(upload.storageKey)
  if (!bytes && 'state' in upload && upload.state !== 'staged') throw new AppError('expired', 'This upload was discarded; its bytes are gone.')
  if (!bytes) throw new Error(`The bytes of upload ${id} are not in the storage.`)
  if (!sha256(bytes).equals(upload.sha256)) throw new Error(`The bytes of upload ${id} do not match their SHA-256.`)
  return { fileName: upload.fileName, bytes }
}
