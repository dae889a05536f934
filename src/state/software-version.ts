/** The version that a write-up names; the package's own, which a test holds it to. */
export const SOFTWARE_VERSION = '0.1.0'
