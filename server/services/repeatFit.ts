import { AppError } from '../../shared/errors'
import type { Actor } from '../../shared/permissions'
import type { RepeatDto } from '../../shared/schemas/fit'
import type { Deps } from '../platform/deps'
import { hex, sealed, sha256 } from '../platform/hashes'
import { findFit, fitExclusions, type FitRow } from '../queries/fits'
import { compareValues } from './compareValues'
import { type Engine, engineOf } from './engine'
import { analysisInput, loadSeries } from './fitInput'
import { SERIES_NOT_FOUND } from './requestFit'
import { unitOfWork } from './unitOfWork'
import { findSeries } from '../queries/series'

export interface RepeatInput { actor: Actor, programmeId: string, seriesId: string, versionNo: number, idempotency?: { key: string, request: unknown } | undefined }

/**
 * Computes a stored fit again from what is stored and compares the two texts byte for byte. Where they differ it says what differs, by how much at most,
 * and whether the engine is another one. Nothing stored changes; that it was repeated is on record.
 */
export async function repeatFit(deps: Deps, { actor, programmeId, seriesId, versionNo, idempotency }: RepeatInput): Promise<RepeatDto> {
  if (!await findSeries(deps.db, programmeId, seriesId, 'programme')) throw new AppError('notFound', SERIES_NOT_FOUND)
  const fit = await findFit(deps.db, programmeId, seriesId, versionNo)
  if (!fit) throw new AppError('notFound', 'There is no such version of this series, or it is not open to you.')
  if (!sha256(fit.result).equals(fit.resultHash)) throw new Error(`The stored result of fit ${fit.id} does not match its hash.`)
  const repeated = await recompute(deps, programmeId, fit)
  const dto = compare(fit, repeated)
  return unitOfWork(deps, { actor, name: 'repeatFit', programmeId, idempotency }, async () => ({
    result: dto, subject: `fit ${fit.id}`, payload: { versionNo, same: dto.same, storedHash: dto.storedHash, repeatedHash: dto.repeatedHash },
  }))
}

interface Repeated { text: string, hash: Buffer, modelVersion: number }

async function recompute(deps: Deps, programmeId: string, fit: FitRow): Promise<Repeated> {
  const loaded = await loadSeries(deps, programmeId, fit.seriesId)
  const exclusions = await fitExclusions(deps.db, programmeId, fit.id)
  const input = analysisInput(loaded, { modelId: fit.modelId, options: JSON.parse(fit.options) as Record<string, number | string | boolean>, exclusions })
  const outcome = loaded.kind.analyse({ ...input, seed: fit.seed })
  return { ...sealed(outcome), modelVersion: loaded.kind.models.find(model => model.id === fit.modelId)?.version ?? 0 }
}

function compare(fit: FitRow, repeated: Repeated): RepeatDto {
  const stored = JSON.parse(fit.engine) as Engine
  const engine = engineOf()
  const { differences, relativeDifference } = compareValues(JSON.parse(fit.result), JSON.parse(repeated.text))
  return {
    same: fit.result === repeated.text, versionNo: fit.versionNo, storedHash: hex(fit.resultHash), repeatedHash: hex(repeated.hash), differences: differences.slice(0, 20),
    differenceCount: differences.length, relativeDifference, storedEngine: stored, engine, sameEngine: stored.lanthorn === engine.lanthorn && stored.node === engine.node && stored.v8 === engine.v8,
    modelVersion: { stored: fit.modelVersion, now: repeated.modelVersion },
  }
}
