import type { Model, Settings } from '../../science/models/define'
import type { Conditions, SeriesTube } from '../types'
import { numbersOf } from './signalProblems'

/**
 * Numbers of the acquisition that a model asks for, as far as the conditions hold them.
 * @param names condition that holds each setting
 * @param ofTube field of the points that holds a setting of the tube; its mean over the points counts
 */
export function settingsFrom(names: Readonly<Record<string, string>>, ofTube: Readonly<Record<string, string>> = {}) {
  return (model: Model, tube: SeriesTube, conditions: Conditions): Settings => Object.fromEntries(Object.keys(model.settings).flatMap((name) => {
    const own = ofTube[name] === undefined ? [] : numbersOf(tube, ofTube[name])
    if (own.length > 0) return [[name, own.reduce((sum, value) => sum + value, 0) / own.length] as const]
    const value = names[name] === undefined ? null : conditions[names[name]] ?? null
    return typeof value === 'number' ? [[name, value] as const] : []
  }))
}
