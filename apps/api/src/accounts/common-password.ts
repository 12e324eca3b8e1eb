/**
 * Words that people put into passwords first of all (common practice; written down from memory): everyday words,
 * keyboard rows, what is beside the keyboard, and this product. A password is common when it is made of nothing but
 * these, digits, repetition and sequences, whatever the case and the usual letter swaps.
 */
const WORDS = (
  'password passwort passwd pass pwd secret geheim admin administrator root user login welcome willkommen hello hallo ' +
  'qwertyuiop qwerty qwertz azerty asdfghjkl asdfgh asdf zxcvbnm zxcvbn yxcvbnm letmein let me in open sesame changeme ' +
  'change default guest test testing temp demo master super iloveyou love you monkey dragon sunshine princess football ' +
  'baseball soccer shadow superman batman trustno one whatever freedom computer internet server summer winter spring ' +
  'autumn january february march april may june july august september october november december monday tuesday ' +
  'wednesday thursday friday saturday sunday abc abcd abcdef abcdefghijkl correct horse battery staple ' +
  'ocean halfdeep modeller reviewer the my is this and new old'
).split(' ');
const LONGEST_FIRST = [...new Set(WORDS)].sort((a, b) => b.length - a.length);
const SWAPS: Record<string, string> = {
  '0': 'o',
  '1': 'l',
  '3': 'e',
  '4': 'a',
  '5': 's',
  '7': 't',
  '@': 'a',
  $: 's',
  '!': 'i',
};

/** Fewer than this many characters to guess, beyond the words, make a password common. */
const FEWEST_SURPRISES = 5;

/** What is left of `shown` when every word found at the same place in `read` is taken out: what has to be guessed. */
function unknownPart(shown: string, read: string): string {
  const known = new Array<boolean>(read.length).fill(false);
  for (const word of LONGEST_FIRST)
    for (let at = read.indexOf(word); at >= 0; at = read.indexOf(word, at + 1))
      if (!known[at]) known.fill(true, at, at + word.length);
  return [...known.keys()].map((at) => (known[at] ? '' : shown[at])).join('');
}

/** Characters that neither repeat nor continue the one before: "aaaa" and "4567" count one each. */
function surprises(text: string): number {
  let count = 0;
  let stride = NaN;
  for (let k = 0; k < text.length; k++) {
    const next = text.charCodeAt(k) - text.charCodeAt(k - 1);
    if (!(Math.abs(next) <= 1 && (Number.isNaN(stride) || next === stride))) count++;
    stride = Math.abs(next) <= 1 ? next : NaN;
  }
  return count;
}

/** A short text over and over counts once: "harbourharbour" is "harbour". */
function withoutRepetition(text: string): string {
  return /^(.+?)\1+$/.exec(text)?.[1] ?? text;
}

/** Whether a password is among the first that anybody would try. Its length is checked elsewhere. */
export function isCommonPassword(password: string): boolean {
  const lower = withoutRepetition(password.toLowerCase().normalize('NFKC').replace(/\s+/g, ''));
  const swapped = lower.replace(/[013457@$!]/g, (sign) => SWAPS[sign] ?? sign);
  return [lower, swapped].some((read) => {
    const left = unknownPart(lower, read).replace(/[^\p{L}\p{N}]/gu, '');
    return surprises(left) < FEWEST_SURPRISES;
  });
}
