/** The version that a job's identity names: a change of any result is a new version. */
export const engineVersion = 'burette-engine-1';
