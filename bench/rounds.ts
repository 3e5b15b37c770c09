/** One way to do the work: returns something of its answers, so that equal answers show. */
export interface Contestant { name: string, run: () => number }
export interface Timed { name: string, seconds: number[], answer: number }

export const median = (values: readonly number[]): number => [...values].sort((a, b) => a - b)[Math.floor(values.length / 2)] ?? Number.NaN

/** CPU seconds of every contestant over rounds that take turns in one run: rates on one machine say little, ratios more. The first rounds warm the compiler and do not count. */
export function takeTurns(contestants: readonly Contestant[], { rounds = 9, warm = 4 }: { rounds?: number, warm?: number } = {}): Timed[] {
  const rows = contestants.map(one => ({ name: one.name, seconds: [] as number[], answer: 0 }))
  for (let round = -warm; round < rounds; round++) {
    contestants.forEach((one, i) => {
      const begin = process.cpuUsage()
      const answer = one.run()
      const { user, system } = process.cpuUsage(begin)
      const row = rows[i]
      if (row && round >= 0) row.seconds.push((user + system) / 1e6)
      if (row) row.answer = answer
    })
  }
  return rows
}

/** Prints rates and ratios to the last contestant, and the goal beside where there is one. */
export function printRates(title: string, rows: readonly Timed[], { count, goals = {} }: { count: number, goals?: Readonly<Record<string, number>> }): void {
  console.log(`\n${title}`)
  const base = median(rows.at(-1)?.seconds ?? [])
  for (const row of rows) {
    const ratio = base / median(row.seconds)
    const goal = goals[row.name]
    console.log(`  ${row.name.padEnd(52)} ${(count / median(row.seconds)).toFixed(0).padStart(9)} a second  ×${ratio.toFixed(1).padStart(6)}${goal === undefined ? '' : `  (asked: ${goal})`}   ${row.answer.toPrecision(11)}`)
  }
}
