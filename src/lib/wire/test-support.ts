/** Shared by the wire tests. */
export const hex = (text: string): Uint8Array => Uint8Array.from(Buffer.from(text, 'hex'));
export const toHex = (bytes: Uint8Array): string => Buffer.from(bytes).toString('hex');
