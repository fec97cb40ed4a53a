/** Raised when a figure, a verdict or the shape of a report changes for the same input; golden reports hold it to that. */
export const ENGINE_VERSION = '1.0.0'
