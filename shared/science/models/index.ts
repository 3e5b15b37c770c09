import { bindingIsotherm } from './bindingIsotherm'
import type { Model } from './define'
import { inversionRecovery3 } from './inversionRecovery3'
import { inversionRecoveryDelay } from './inversionRecoveryDelay'
import { inversionRecoveryTiRepeat } from './inversionRecoveryTiRepeat'
import { lookLocker } from './lookLocker'
import { multiEcho, multiEchoOffset } from './multiEcho'
import { multiEchoMeanSquares, multiEchoNoiseFloor } from './multiEchoNoise'
import { saturationRecovery, saturationRecoveryOffset } from './saturationRecovery'
import { variableFlipAngle } from './variableFlipAngle'

/** Every model the product can fit, by id. */
export const MODELS = {
  inversionRecovery3, inversionRecoveryTiRepeat, inversionRecoveryDelay, saturationRecovery, saturationRecoveryOffset, lookLocker, variableFlipAngle,
  multiEcho, multiEchoOffset, multiEchoNoiseFloor, multiEchoMeanSquares, bindingIsotherm,
} as const

export type ModelId = keyof typeof MODELS

export const MODEL_IDS = Object.keys(MODELS) as [ModelId, ...ModelId[]]

/** The model of an id that came from outside; null when there is none. */
export function findModel(id: string): Model | null {
  return Object.hasOwn(MODELS, id) ? MODELS[id as ModelId] as Model : null
}
