import { afterAll, describe, expect, it } from 'vitest'
import { confirmUpload } from '../../server/services/confirmUpload'
import { discardUpload } from '../../server/services/discardUpload'
import { expireUploads } from '../../server/services/expireUploads'
import { previewUpload } from '../../server/services/previewUpload'
import { readUploadFile } from '../../server/services/readUploadFile'
import { showUpload } from '../../server/services/showUpload'
import { plainName, stageUpload } from '../../server/services/stageUpload'
import { updateProgramme } from '../../server/queries/programmes'
import { refusal } from '../support/actors'
import { makeDeps, makePerson, makeProgramme, TEST_START } from '../support/factory'
import { toyKind } from '../support/toyKind'
import { bytesOf, GLOW_DRAFT, glowTable, makeAgent, runJobs, stage, upload } from '../support/uploads'

const deps = makeDeps({ kinds: { [toyKind.kind]: toyKind } })
afterAll(() => deps.close())

describe('staging', () => {
  it('keeps the very bytes and their SHA-256, for their owner alone [product: way through 2]', async () => {
    const programme = await makeProgramme(deps)
    const other = await makePerson(deps, { programmeId: programme.id, roles: ['chemist'] })
    const staged = await stageUpload(deps, { actor: programme.people.chemist, programmeId: programme.id, files: [{ fileName: 'C:\\data\\abc.csv', bytes: bytesOf('abc') }] })
    // FIPS 180-2, appendix B.1.
    expect(staged).toMatchObject({ fileName: 'abc.csv', bytes: 3, sha256: 'ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad', state: 'staged', seenBefore: [] })
    const key = { programmeId: programme.id, id: staged.id }
    expect(await showUpload(deps, { ...key, actor: programme.people.chemist })).toEqual(staged)
    expect(await refusal(showUpload(deps, { ...key, actor: other }))).toMatchObject({ code: 'notFound' })
    expect(await refusal(readUploadFile(deps, { ...key, actor: other, scope: 'programme' }))).toMatchObject({ code: 'notFound' })
    const read = await readUploadFile(deps, { ...key, actor: programme.people.chemist, scope: 'programme' })
    expect(new TextDecoder().decode(read.bytes)).toBe('abc')
  })

  it('is another programme\'s as if it were not there', async () => {
    const [mine, theirs] = [await makeProgramme(deps), await makeProgramme(deps)]
    const id = await stage(deps, mine, glowTable())
    expect(await refusal(showUpload(deps, { actor: mine.people.chemist, programmeId: theirs.id, id }))).toMatchObject({ code: 'notFound' })
    const stored = await upload(deps, mine, { content: glowTable(), draft: GLOW_DRAFT, actor: mine.people.chemist }).catch(error => error as { code: string })
    expect(stored).toMatchObject({ code: 'invalidInput' })
  })

  it.each([
    ['nothing', [], 'invalidInput'],
    ['two files', [{ fileName: 'a.csv', bytes: bytesOf('a') }, { fileName: 'b.csv', bytes: bytesOf('b') }], 'invalidInput'],
    ['an empty file', [{ fileName: 'a.csv', bytes: new Uint8Array() }], 'invalidInput'],
    ['a file over 8 MB', [{ fileName: 'a.csv', bytes: new Uint8Array(8 * 1024 * 1024 + 1) }], 'tooLarge'],
  ])('refuses %s and stages nothing', async (_, files, code) => {
    const programme = await makeProgramme(deps)
    const error = await stageUpload(deps, { actor: programme.people.chemist, programmeId: programme.id, files }).catch(refused => refused as { code: string, details: { accepted: string } })
    expect(error).toMatchObject({ code, details: { field: 'file', accepted: expect.stringMatching(/.{10,}/) } })
    expect((await deps.storage.keys('upload')).filter(key => key.includes(programme.id))).toEqual([])
  })

  it('takes the last part of a path for the name, without control characters', () => {
    expect(plainName('../../etc/pass\u0000wd')).toBe('passwd')
    expect(plainName('\u0007')).toBe('without a name')
    expect([...plainName('é'.repeat(400))]).toHaveLength(255)
  })

  it('points out bytes that the programme has seen, by whom and in which series, and does not bar them', async () => {
    const programme = await makeProgramme(deps)
    await makeAgent(deps, programme)
    const first = await upload(deps, programme, { content: glowTable(), draft: GLOW_DRAFT })
    const id = await stage(deps, programme, glowTable(), { fileName: 'again.csv' })
    const { upload: again, canStore } = await previewUpload(deps, { actor: programme.people.chemist, programmeId: programme.id, id, draft: GLOW_DRAFT })
    expect(again.seenBefore).toMatchObject([{ personName: programme.people.chemist.name, at: TEST_START.toISOString(), fileName: 'table.csv', series: [{ id: first.series[0]!.id, agentCode: 'SK-07' }] }])
    expect(canStore).toBe(true)
  })

  it('keeps what was chosen, so that it can be gone on with', async () => {
    const programme = await makeProgramme(deps)
    const id = await stage(deps, programme, glowTable())
    const key = { actor: programme.people.chemist, programmeId: programme.id, id }
    await previewUpload(deps, { ...key, draft: { ...GLOW_DRAFT, lot: 'L9' } })
    expect((await showUpload(deps, key)).draft).toEqual({ ...GLOW_DRAFT, lot: 'L9' })
  })

  it('is over after 24 hours: refused, then swept with its bytes, while stored files stay', async () => {
    const own = { ...deps, clock: { ...deps.clock, now: () => TEST_START } }
    const programme = await makeProgramme(deps)
    await makeAgent(deps, programme)
    const kept = await upload(deps, programme, { content: glowTable(), draft: GLOW_DRAFT })
    const id = await stage(deps, programme, glowTable({ noise: 1 }))
    const key = { actor: programme.people.chemist, programmeId: programme.id, id }
    // Ids carry the time of the machine, so the sweep looks from a day after both.
    const later = { ...own, clock: { ...deps.clock, now: () => new Date(Date.now() + 25 * 3_600_000) } }
    expect(await refusal(previewUpload(later, { ...key, draft: GLOW_DRAFT }))).toMatchObject({ code: 'expired' })
    expect(await refusal(confirmUpload(later, { ...key, draft: GLOW_DRAFT }))).toMatchObject({ code: 'expired' })
    // Other tests leave uploads as well, and one sweep ends a page of them.
    for (let ended = 1; ended > 0;) ended = (await expireUploads(later)).expired
    expect((await showUpload(deps, key)).state).toBe('expired')
    const keys = (await deps.storage.keys('upload')).filter(each => each.includes(programme.id))
    expect(keys).toHaveLength(1)
    expect(keys[0]).toContain(kept.uploadId)
  })

  it('sweeps bytes whose row was never written, but not those a moment old', async () => {
    const [old, fresh] = [`upload:${deps.ids.next()}:01900000-0000-7000-8000-000000000000`, `upload:${deps.ids.next()}:${deps.ids.next()}`]
    await deps.storage.put(old, bytesOf('lost'))
    await deps.storage.put(fresh, bytesOf('on its way'))
    await expireUploads({ ...deps, clock: { ...deps.clock, now: () => new Date() } })
    expect(await deps.storage.get(old)).toBeNull()
    expect(await deps.storage.get(fresh)).not.toBeNull()
  })

  it('discards once; its bytes go with the next job, and it cannot be stored any more', async () => {
    const programme = await makeProgramme(deps)
    const id = await stage(deps, programme, glowTable())
    const key = { actor: programme.people.chemist, programmeId: programme.id, id }
    await discardUpload(deps, key)
    expect(await refusal(discardUpload(deps, key))).toMatchObject({ code: 'conflict', message: expect.stringContaining('discarded') })
    expect(await refusal(confirmUpload(deps, { ...key, draft: GLOW_DRAFT }))).toMatchObject({ code: 'conflict' })
    await runJobs(deps, programme)
    expect((await deps.storage.keys('upload')).filter(each => each.includes(id))).toEqual([])
    expect(await refusal(readUploadFile(deps, { ...key, scope: 'programme' }))).toMatchObject({ code: 'expired' })
  })
})

describe('the stored file', () => {
  it('opens to partners only where the lead opened files and a number of it is signed [product: partner]', async () => {
    const programme = await makeProgramme(deps)
    await makeAgent(deps, programme)
    const { uploadId } = await upload(deps, programme, { content: glowTable(), draft: GLOW_DRAFT })
    const read = (scope: 'programme' | 'signed') => readUploadFile(deps, { actor: programme.people.partner, programmeId: programme.id, scope, id: uploadId })
    expect((await read('programme')).fileName).toBe('table.csv')
    expect(await refusal(read('signed'))).toMatchObject({ code: 'notFound' })
    await updateProgramme(deps.db, programme.id, { name: 'Open', description: '', partnerSeesRawFiles: true })
    expect(await refusal(read('signed'))).toMatchObject({ code: 'notFound' })
  })

  it('is refused loudly when the storage gives back other bytes', async () => {
    const programme = await makeProgramme(deps)
    await makeAgent(deps, programme)
    const { uploadId } = await upload(deps, programme, { content: glowTable(), draft: GLOW_DRAFT })
    await deps.storage.put(`upload:${programme.id}:${uploadId}`, bytesOf('changed'))
    await expect(readUploadFile(deps, { actor: programme.people.chemist, programmeId: programme.id, scope: 'programme', id: uploadId })).rejects.toThrow('do not match their SHA-256')
  })
})
