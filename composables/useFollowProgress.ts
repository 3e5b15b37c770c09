/** Follows the programme's jobs while the calling page is shown, where the person may; `finished` runs when a fit of the series ends. */
export function useFollowProgress(seriesId: () => string | null, finished: () => void) {
  const session = useSessionStore()
  const progress = useProgressStore()
  let stop: (() => void) | null = null
  onMounted(() => { if (session.programmeCode && session.may('progress.follow')) stop = progress.follow(session.programmeCode) })
  onBeforeUnmount(() => stop?.())
  const ended = computed(() => progress.jobs.filter(job => job.state === 'done' && (seriesId() === null || job.seriesId === seriesId())).map(job => job.jobId).join())
  watch(ended, (now, before) => { if (now.split(',').some(id => id !== '' && !before.split(',').includes(id))) finished() })
  return progress
}
