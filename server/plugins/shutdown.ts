import { closeDeps } from '../utils/deps'

export default defineNitroPlugin((nitro) => {
  nitro.hooks.hook('close', closeDeps)
})
