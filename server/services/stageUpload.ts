import { AppError } from '../../shared/errors'
import { UPLOAD_LIMITS } from '../../shared/measurements/tabular/limits'
import type { Actor } from '../../shared/permissions'
import type { StagedUploadDto } from '../../shared/schemas/upload'
import type { Deps } from '../platform/deps'
import { hex, sha256 } from '../platform/hashes'
import { insertStaged } from '../queries/uploads'
import { showUpload } from './showUpload'
import { unitOfWork } from './unitOfWork'

export const STAGED_HOURS = 24

export interface StageInput { actor: Actor, programmeId: string, files: readonly { fileName: string, bytes: Uint8Array }[], idempotency?: { key: string, request: unknown } | undefined }

/**
 * Keeps the bytes of one file for its owner, for 24 hours; nothing is stored as a measurement. The bytes go first and under the key they will keep:
 * a row never names bytes that are not there, and bytes without a row are swept. The same idempotency key with the same file answers what was staged
 * before: when an answer was lost, sending again does not stage twice.
 */
export async function stageUpload(deps: Deps, { actor, programmeId, files, idempotency }: StageInput): Promise<StagedUploadDto> {
  const file = onlyFile(files)
  const id = deps.ids.next()
  const storageKey = `upload:${programmeId}:${id}`
  const hash = sha256(file.bytes)
  await deps.storage.put(storageKey, file.bytes)
  // A form has no JSON body: the file itself is the request.
  const command = idempotency && { key: idempotency.key, request: { programmeId, fileName: plainName(file.fileName), sha256: hex(hash) } }
  const staged = await unitOfWork(deps, { actor, name: 'stageUpload', programmeId, idempotency: command }, async (work) => {
    const expiresAt = new Date(work.now.getTime() + STAGED_HOURS * 3_600_000)
    await insertStaged(work.trx, {
      id, programmeId, personId: actor.personId, fileName: plainName(file.fileName), bytes: file.bytes.length, sha256: hash, storageKey, draft: '{}', createdAt: work.now, expiresAt,
    })
    const hour = work.now.toISOString().slice(0, 13)
    await work.enqueue({ kind: 'uploads.sweep', dedupeKey: `uploads.sweep:${hour}`, payload: {}, maxAttempts: 5, delaySeconds: (STAGED_HOURS + 1) * 3600 })
    return { result: { id }, subject: `upload ${id}`, payload: { fileName: plainName(file.fileName), bytes: file.bytes.length, sha256: hex(hash) } }
  })
  if (staged.id !== id) await deps.storage.remove(storageKey)
  return showUpload(deps, { actor, programmeId, id: staged.id })
}

function onlyFile(files: StageInput['files']): StageInput['files'][number] {
  const [file, ...others] = files
  if (!file || others.length > 0) throw new AppError('invalidInput', `${files.length} files came; one upload is one file.`, { field: 'file', accepted: 'one file at a time' })
  if (file.bytes.length === 0) throw new AppError('invalidInput', `${plainName(file.fileName)} is empty.`, { field: 'file', accepted: 'a CSV, TSV or XLSX file with a table' })
  if (file.bytes.length > UPLOAD_LIMITS.bytes) {
    throw new AppError('tooLarge', `${plainName(file.fileName)} has ${file.bytes.length} bytes.`, { field: 'file', accepted: `at most ${UPLOAD_LIMITS.bytes} bytes (8 MB)` })
  }
  return file
}

/** The last part of a path, without control characters and marks that turn the direction of writing; browsers and scripts may send more. */
export function plainName(fileName: string): string {
  const last = fileName.split(/[\\/]/).at(-1)?.replace(/[\p{Cc}\p{Bidi_Control}\u200B-\u200D\u2060\uFEFF]/gu, '').trim() ?? ''
  return [...last].slice(0, 255).join('') || 'without a name'
}
