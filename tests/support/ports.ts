export { anyFreePort } from '../../scripts/lib/ports.mjs'
