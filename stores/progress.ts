import { defineStore } from 'pinia'
import type { ProgressJob } from '#shared/schemas/progress'
import { openProgressStream } from '~/composables/useProgressStream'

export type FitStage = 'queued' | 'running' | 'again' | 'parked'

/** What fits are doing in the programme looked at, as the jobs table says. Pages call `follow` while they are shown. */
export const useProgressStore = defineStore('progress', () => {
  const jobs = shallowRef<readonly ProgressJob[]>([])
  let followed: { code: string, pages: number, stop: () => void } | null = null

  /** Hears of the programme until the returned function is called; several pages share one stream. */
  function follow(programmeCode: string): () => void {
    if (followed && followed.code !== programmeCode) {
      followed.stop()
      followed = null
      jobs.value = []
    }
    followed ??= { code: programmeCode, pages: 0, stop: openProgressStream(programmeCode, (progress) => { jobs.value = progress.jobs }) }
    const mine = followed
    mine.pages += 1
    return () => {
      mine.pages -= 1
      if (mine.pages > 0 || followed !== mine) return
      mine.stop()
      followed = null
    }
  }

  /** Newest job of a series; jobs come newest first. */
  const jobOf = (seriesId: string): ProgressJob | null => jobs.value.find(job => job.seriesId === seriesId) ?? null

  /** Where a fit of the series stands; null when none is on its way. 'again': it failed and is tried once more. */
  function stageOf(seriesId: string): FitStage | null {
    const job = jobOf(seriesId)
    if (!job || job.state === 'done' || job.state === 'cancelled') return null
    return job.state === 'queued' && job.attempts > 0 ? 'again' : job.state
  }

  return { jobs, follow, jobOf, stageOf }
})
