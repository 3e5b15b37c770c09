import { connect } from 'node:net'
import { afterAll, beforeAll, describe, expect, inject, it } from 'vitest'
import { makeApiProgramme, type ApiProgramme } from '../support/apiPeople'
import { BROKEN, mutants } from '../support/brokenUploads'
import { makeDeps } from '../support/factory'
import { agentBody } from '../support/registry'
import { SHEET_SHAPES } from '../support/sheetShapes'

const deps = makeDeps()
let programme: ApiProgramme
let path: string
beforeAll(async () => {
  programme = await makeApiProgramme(deps)
  path = `/api/programmes/${programme.code}`
  const registered = await programme.people.chemist.client.send(`${path}/agents`, { method: 'POST', body: agentBody({ code: 'SK-07', lot: 'B2' }) })
  expect(registered.status, registered.text).toBe(200)
})
afterAll(() => deps.close())

const draft = { kind: 'relax.t1.ir', complexCode: 'SK-07', lot: 'B2', conditions: { instrument: 'Scanner 2', b0_T: 3, temperature_K: 310.15, pH: 7.4, medium: 'water', timing: 'longTr', signalForm: 'signed', concBasis: 'icp', concScaleError_frac: 0.01 } }

async function stage(bytes: Uint8Array, { name = 'file.xlsx', key }: { name?: string, key?: string } = {}) {
  const form = new FormData()
  form.append('file', new Blob([bytes as Uint8Array<ArrayBuffer>]), name)
  return programme.people.chemist.client.send(`${path}/uploads`, { method: 'POST', body: form, ...(key ? { headers: { 'idempotency-key': key } } : {}) })
}

describe('a workbook over HTTP', () => {
  it('is read in the built thread, from preview to store', async () => {
    const { client } = programme.people.chemist
    const shape = SHEET_SHAPES.find(one => one.name === 'conditions on a sheet of their own')
    const staged = await stage(shape!.bytes)
    expect(staged.status, staged.text).toBe(200)
    const { id } = staged.body as { id: string }
    const preview = await client.send(`${path}/uploads/${id}/preview`, { method: 'POST', body: { draft } })
    expect(preview.body, preview.text).toMatchObject({ workbook: { sheet: 'Signals' }, canStore: true })
    const confirmed = await client.send(`${path}/uploads/${id}/confirm`, { method: 'POST', body: { draft } })
    expect(confirmed.status, confirmed.text).toBe(200)
  })
})

describe('files that are broken or hostile, over HTTP', () => {
  it('are answered with words and a code, never with a fault of the server', async () => {
    const { client } = programme.people.chemist
    const files = [...BROKEN.filter((_, index) => index % 12 === 5), ...mutants(504).filter((_, index) => index % 40 === 3)]
    for (const { name, bytes } of files) {
      const staged = await stage(bytes)
      if (staged.status !== 200) {
        expect([413, 422], `${name}: ${staged.text}`).toContain(staged.status)
        expect(staged.body, name).toMatchObject({ data: { code: expect.stringMatching(/tooLarge|invalidInput/) as string, accepted: expect.any(String) as string } })
        continue
      }
      const { id } = staged.body as { id: string }
      const preview = await client.send(`${path}/uploads/${id}/preview`, { method: 'POST', body: { draft } })
      expect(preview.status, `${name}: ${preview.text.slice(0, 300)}`).toBe(200)
      if ((preview.body as { canStore: boolean }).canStore) continue
      const confirmed = await client.send(`${path}/uploads/${id}/confirm`, { method: 'POST', body: { draft } })
      expect(confirmed.status, name).toBe(422)
      expect(confirmed.body, name).toMatchObject({ data: { code: 'invalidInput', problems: expect.any(Array) as unknown[] } })
    }
    expect((await client.send(`${path}/series`)).status).toBe(200)
  }, 240_000)

  it('of sixty megabytes are refused with 413 before their bytes are read', async () => {
    const { client } = programme.people.chemist
    const { hostname, port } = new URL(inject('baseURL'))
    const head = [`POST ${path}/uploads HTTP/1.1`, `host: ${hostname}:${port}`, 'content-type: multipart/form-data; boundary=x', `content-length: ${60 * 1024 * 1024}`, `csrf-token: ${client.token}`, `cookie: ${[...client.cookies].map(pair => pair.join('=')).join('; ')}`, '', ''].join('\r\n')
    const answer = await new Promise<string>((resolve, reject) => {
      // Only the head is sent: an answer can come from nothing but the declared length.
      const socket = connect(Number(port), hostname, () => { socket.write(head) })
      let text = ''
      socket.on('data', (chunk) => {
        text += chunk.toString()
        if (!text.includes('accepted')) return
        socket.destroy()
        resolve(text)
      })
      socket.on('error', reject)
    })
    expect(answer).toMatch(/^HTTP\/1\.1 413/)
    expect(answer).toMatch(/"code":\s*"tooLarge"/)
  })

  it('sent twice with one key are staged once', async () => {
    const bytes = SHEET_SHAPES[0]!.bytes
    const [one, two] = await Promise.all([stage(bytes, { key: 'lost-answer-1' }), stage(bytes, { key: 'lost-answer-1' })])
    expect([one.status, two.status]).toEqual([200, 200])
    expect((one.body as { id: string }).id).toBe((two.body as { id: string }).id)
  })
})
