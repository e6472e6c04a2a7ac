/** Version of the engine's arithmetic; it changes whenever a forecast would. */
export const ENGINE_VERSION = '1.2.0'
