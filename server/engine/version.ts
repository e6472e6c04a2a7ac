/** Version of the engine's arithmetic; it changes whenever a forecast or a plan would. */
export const ENGINE_VERSION = '1.4.0'
