import { ENGINE_VERSION } from '../../shared/science/least-squares/engine'

export interface Engine { lanthorn: string, node: string, v8: string }

/** What computed a number: our engine's version, Node and V8. A repeat under another engine says so. */
export const engineOf = (): Engine => ({ lanthorn: String(ENGINE_VERSION), node: process.versions.node, v8: process.versions.v8 })
