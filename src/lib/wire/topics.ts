/** Topics of protocol.md, 'Topics'. */
export type UpKind = 'reading' | 'pair' | 'hello' | 'ack' | 'gone';

const SERIAL = /^[A-Z0-9-]{4,32}$/;
const UP = /^lodekeep\/1\/([A-Z0-9-]{4,32})\/up\/(reading|pair|hello|ack|gone)$/;
const DOWN = /^lodekeep\/1\/([A-Z0-9-]{4,32})\/down$/;

/** All that nodes send, as an MQTT filter. */
export const UP_FILTER = 'lodekeep/1/+/up/#';

export const isSerial = (text: string): boolean => SERIAL.test(text);
export const upTopic = (serial: string, kind: UpKind): string => `lodekeep/1/${serial}/up/${kind}`;
export const upPrefix = (serial: string): string => `lodekeep/1/${serial}/up/`;
export const downTopic = (serial: string): string => `lodekeep/1/${serial}/down`;

export function parseUpTopic(topic: string): { serial: string; kind: UpKind } | null {
	const match = UP.exec(topic);
	return match === null ? null : { serial: match[1] as string, kind: match[2] as UpKind };
}

/** The serial that a command is for, or null. */
export function parseDownTopic(topic: string): string | null {
	return DOWN.exec(topic)?.[1] ?? null;
}
