import { isMainThread } from 'node:worker_threads'

// Preloaded into the programs that start, dev and test run: when the starter is killed without a chance to stop them, the channel to it
// closes, and they end as if asked to. Nothing is left behind holding the port.
if (isMainThread && process.channel) {
  process.once('disconnect', () => {
    process.kill(process.pid, 'SIGTERM')
    setTimeout(() => process.exit(1), 15_000).unref()
  })
  process.channel.unref()
}
