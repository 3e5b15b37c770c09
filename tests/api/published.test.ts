import { readFile } from 'node:fs/promises'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { makeApiProgramme, type ApiProgramme } from '../support/apiPeople'
import type { ApiClient } from '../support/apiClient'
import { makeDeps } from '../support/factory'
import { agentBody } from '../support/registry'

const deps = makeDeps()
let programme: ApiProgramme
beforeAll(async () => { programme = await makeApiProgramme(deps) })
afterAll(() => deps.close())

interface Table { file: string, agent: string, quantity: 'T1' | 'T2', published: number, tolerance: number }

/** Waits on the state of the fit, which the worker process makes. */
async function fitOf(client: ApiClient, seriesId: string): Promise<{ outcome: string, series: { headline: { value: number, se: number } } }> {
  for (let tries = 0; tries < 200; tries++) {
    const answer = await client.send(`/api/programmes/${programme.code}/series/${seriesId}/fits/1`)
    if (answer.status === 200) return answer.body as Awaited<ReturnType<typeof fitOf>>
    if (answer.status !== 404) throw new Error(`${answer.status} ${answer.text}`)
    await new Promise(resolve => setTimeout(resolve, 150))
  }
  throw new Error('The worker made no fit within 30 s.')
}

describe('a published table, uploaded over HTTP and fitted by the worker', () => {
  const tables: Table[] = [
    { file: 'nickel-chloride-t1.csv', agent: 'NI-01', quantity: 'T1', published: 0.7, tolerance: 0.2 },
    { file: 'manganese-chloride-t2.csv', agent: 'MN-01', quantity: 'T2', published: 108.3, tolerance: 0.05 },
  ]
  it.each(tables)('$file gives the published relaxivity within its stated tolerance [fixtures/uploads/published/SOURCE.md, from memory]', async ({ file, agent, quantity, published, tolerance }) => {
    const { client } = programme.people.chemist
    const path = `/api/programmes/${programme.code}`
    const registered = await client.send(`${path}/agents`, { method: 'POST', body: agentBody({ code: agent, lot: 'P1' }) })
    expect(registered.status, registered.text).toBe(200)
    const form = new FormData()
    form.append('file', new Blob([await readFile(new URL(`../../fixtures/uploads/published/${file}`, import.meta.url))]), file)
    const staged = await client.send(`${path}/uploads`, { method: 'POST', body: form })
    expect(staged.status, staged.text).toBe(200)
    const { id } = staged.body as { id: string }
    const draft = { kind: 'relax.fitted', complexCode: agent, lot: 'P1', conditions: { instrument: 'Reference phantom', pH: 7, concBasis: 'nominal', concScaleError_frac: 0, quantity } }
    const preview = await client.send(`${path}/uploads/${id}/preview`, { method: 'POST', body: { draft } })
    expect(preview.body, preview.text).toMatchObject({ canStore: true })
    const confirmed = await client.send(`${path}/uploads/${id}/confirm`, { method: 'POST', body: { draft } })
    expect(confirmed.status, confirmed.text).toBe(200)
    const [series] = (confirmed.body as { series: { id: string }[] }).series
    const fit = await fitOf(client, series!.id)
    expect(fit.outcome).toBe('ok')
    expect(Math.abs(fit.series.headline.value / published - 1)).toBeLessThan(tolerance)
  })
})
