/**
 * Version of the confidentiality pledge that a response is kept with; the words are `grower:pledge.*`. A change of what
 * is promised is a new version, so that each answer stays under the promise it was given for.
 */
export const pledgeVersion = "2026-1";
