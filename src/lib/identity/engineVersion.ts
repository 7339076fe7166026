/**
 * Version of everything that can move a score: readers, steps, model, decision. A golden file of results
 * fails the build when a score moves in its last bit and this has not been raised.
 */
export const ENGINE_VERSION = '1.2.0';
