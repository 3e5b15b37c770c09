/** Times as people say them. Pure: the moment that counts as now and the time zone are given. */
export interface TimeStyle { now_ms: number, timeZone: string }

const MINUTE_ms = 60_000
const DAY_ms = 86_400_000
const MONTHS = ['Jan', 'Feb', 'Mar', 'Apr', 'May', 'Jun', 'Jul', 'Aug', 'Sep', 'Oct', 'Nov', 'Dec']

interface WallTime { year: number, month: number, day: number, weekday: string, clock: string }

function wallTime(at_ms: number, timeZone: string): WallTime {
  const parts = new Intl.DateTimeFormat('en-GB', {
    timeZone, year: 'numeric', month: 'numeric', day: 'numeric', weekday: 'long', hour: '2-digit', minute: '2-digit', hourCycle: 'h23',
  }).formatToParts(at_ms)
  const part = (type: Intl.DateTimeFormatPartTypes): string => parts.find(one => one.type === type)?.value ?? ''
  return { year: Number(part('year')), month: Number(part('month')), day: Number(part('day')), weekday: part('weekday'), clock: `${part('hour')}:${part('minute')}` }
}

const dayNumber = (wall: WallTime): number => Date.UTC(wall.year, wall.month - 1, wall.day) / DAY_ms

/** `18 Nov`, with the year when it is another one. */
export function writeDay(at_ms: number, { now_ms, timeZone }: TimeStyle): string {
  const wall = wallTime(at_ms, timeZone)
  const day = `${wall.day} ${MONTHS[wall.month - 1]}`
  return wall.year === wallTime(now_ms, timeZone).year ? day : `${day} ${wall.year}`
}

/** `today, 16:40`, `yesterday, 16:40`, `Friday, 11:05` within six days, else `18 Nov, 15:02`. Times ahead are given by date. */
export function writeMoment(at_ms: number, style: TimeStyle): string {
  const wall = wallTime(at_ms, style.timeZone)
  const daysAgo = dayNumber(wallTime(style.now_ms, style.timeZone)) - dayNumber(wall)
  const day = daysAgo === 0 ? 'today' : daysAgo === 1 ? 'yesterday' : daysAgo > 1 && daysAgo < 7 ? wall.weekday : writeDay(at_ms, style)
  return `${day}, ${wall.clock}`
}

/** How long ago, as short as a queue wants it: `3 min`, `20 h`, `2 d`. */
export function writeAge(at_ms: number, now_ms: number): string {
  const age_ms = Math.max(0, now_ms - at_ms)
  if (age_ms < MINUTE_ms) return 'now'
  if (age_ms < 60 * MINUTE_ms) return `${Math.floor(age_ms / MINUTE_ms)} min`
  return age_ms < 2 * DAY_ms ? `${Math.floor(age_ms / (60 * MINUTE_ms))} h` : `${Math.floor(age_ms / DAY_ms)} d`
}
