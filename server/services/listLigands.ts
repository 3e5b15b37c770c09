import { LigandPayload } from '../../shared/schemas/ligand'
import type { Deps } from '../platform/deps'
import { listLigandRows } from '../queries/ligands'
import { readVersions } from '../queries/versions'

export interface LigandChoice { code: string, name: string, topology: 'ring' | 'openChain', charge: number, denticity: number, smiles: string }

/** Registered ligands by code, as the form offers them. */
export async function listLigands(deps: Pick<Deps, 'db'>, { programmeId }: { programmeId: string }): Promise<{ ligands: LigandChoice[] }> {
  const [rows, versions] = await Promise.all([listLigandRows(deps.db, programmeId), readVersions(deps.db, 'ligand', programmeId)])
  return {
    ligands: rows.map((row) => {
      const { name, topology, charge, denticity, smiles } = LigandPayload.parse(versions.find(one => one.parentId === row.id)!.payload)
      return { code: row.code, name, topology, charge, denticity, smiles }
    }),
  }
}
