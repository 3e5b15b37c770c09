import type { Dimension } from '../../science/units'
import type { Conditions } from '../../measurements/types'
import type { EvidenceDraft } from '../types'
import type { RecordEntry } from './entry'

export type BoundKind = '=' | '<' | '>'

interface FieldBase {
  /** Name in the entry; a condition's name carries its stored unit (temperature_K). */
  readonly key: string
  /** Notation, see shared/notation.ts. */
  readonly label: string
  readonly help?: string
  readonly required: boolean
  /** Heading that the form sets it under. */
  readonly group: string
  /** Asked only where a choice made before is one of these. */
  readonly onlyWhen?: { readonly key: string, readonly isOneOf: readonly string[] }
  /** Not asked where a choice is one of these: what the source cannot say of itself. */
  readonly unless?: { readonly key: string, readonly isOneOf: readonly string[] }
}

interface NumberBase extends FieldBase {
  /** null: a number that has one unit only. */
  readonly dimension: Dimension | null
  /** Unit it is kept in, a symbol of the unit table. */
  readonly stored: string
  /** Units a person may type it in; the first is offered. */
  readonly units: readonly string[]
  /** Ends of what is accepted, in the stored unit. */
  readonly min: number
  readonly max: number
  /** The lower end itself is not accepted. */
  readonly isAbove?: boolean
}

/** A measured value with its error, exact or a bound. */
export interface QuantityField extends NumberBase { readonly type: 'quantity', readonly bounds: readonly BoundKind[] }
/** A plain number, such as a condition. */
export interface NumberField extends NumberBase { readonly type: 'number' }
/** A list of log constants with their errors, such as protonation steps. */
export interface StepsField extends FieldBase { readonly type: 'steps', readonly most: number, readonly min: number, readonly max: number }
export interface ChoiceField extends FieldBase {
  readonly type: 'choice'
  readonly options: readonly { readonly value: string, readonly label: string }[]
  /** Chosen at the start; only where no wrong choice can go unseen. */
  readonly preset?: string
}
export interface TextField extends FieldBase { readonly type: 'text', readonly most: number }
export type RecordField = QuantityField | NumberField | StepsField | ChoiceField | TextField

export interface RecordProblem { readonly field: string, readonly message: string, readonly accepted: string }

/** What a record says nothing of and its evidence needs. */
export interface RecordContext {
  readonly metal: string
  readonly ligandProtonation: { readonly steps: readonly { readonly value: number, readonly se: number | null }[], readonly temperature_K: number, readonly ionicStrength_M: number, readonly medium: string } | null
}

/**
 * A kind of typed record, declared once: what is asked, what is accepted, which evidence comes out. Form, check, storage and pages read this and
 * know nothing of any one kind.
 */
export interface RecordKind {
  readonly kind: string
  readonly version: number
  readonly title: string
  /** One sentence for whoever chooses a kind. */
  readonly purpose: string
  readonly subject: 'complex' | 'batch'
  readonly fields: readonly RecordField[]
  readonly conditions: readonly RecordField[]
  /** What no single field can tell. Fields are sound by then. */
  readonly check: (entry: RecordEntry, context: RecordContext) => RecordProblem[]
  readonly emits: (entry: RecordEntry, context: RecordContext) => EvidenceDraft[]
  /** The main values in one line, notation. */
  readonly summarise: (entry: RecordEntry, context: Pick<RecordContext, 'metal'>) => string
  /** Conditions in one line. */
  readonly describe: (conditions: Conditions) => string
}

export const defineRecord = (kind: RecordKind): RecordKind => kind

export const fieldsOf = (kind: RecordKind): readonly RecordField[] => [...kind.fields, ...kind.conditions]

/** Whether a field is asked, given the choices made so far. */
export function isAsked(field: RecordField, entry: RecordEntry): boolean {
  const isChosen = ({ key, isOneOf }: { readonly key: string, readonly isOneOf: readonly string[] }): boolean => {
    const choice = entry[key]
    return choice?.type === 'choice' && isOneOf.includes(choice.choice)
  }
  return (!field.onlyWhen || isChosen(field.onlyWhen)) && !(field.unless && isChosen(field.unless))
}
