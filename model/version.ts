/** Changes whenever the same pairing could get another verdict: verdicts are stored under it and never mixed. */
export const MODEL_VERSION = '4';
