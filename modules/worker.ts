import { defineNuxtModule } from '@nuxt/kit'

export default defineNuxtModule({ meta: { name: 'worker' }, setup() {} })
