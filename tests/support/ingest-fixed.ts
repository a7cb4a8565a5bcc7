/** Shared by tests and the processes that they start. */
export const SECRET = 'an installation secret for tests, long enough';
