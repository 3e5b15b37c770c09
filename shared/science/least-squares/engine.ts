/** Version of the numerical engine. Goes up with any change that moves a number; stored with every result. */
export const ENGINE_VERSION = 3
