/** The version of the engine's numbers: it rises only when the same study file would give other results. */
export const resultsVersion = 3;
