import * as z from 'zod';

/** Control characters, and those that turn or hide what stands beside them: names are shown in lists and in mails. */
const UNSEEN = /[\p{Cc}\u2028\u2029\u202a-\u202e\u2066-\u2069\ufeff]/u;

/** Whether a text of several lines has no control characters but line ends and tabs; the database takes no zero byte. */
export const isPlain = (text: string): boolean => !/[^\P{Cc}\n\r\t]/u.test(text);

/** A text of one line without invisible characters, trimmed. `what` begins the messages: "A name". */
export function oneLine(longest: number, what: string) {
  return z
    .string()
    .trim()
    .max(longest, `${what} has at most ${longest} characters.`)
    .refine((text) => !UNSEEN.test(text), `${what} is one line, without invisible characters.`);
}
