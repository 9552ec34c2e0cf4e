/**
 * Pieces of a user's text as they are shown in a message: in backquotes, short, on one line. Characters that would not be
 * seen, or would act on a terminal, are shown by their code point.
 */

const unseen = /[\p{Cc}\p{Cf}\p{Cs}\p{Zl}\p{Zp}\p{Co}\p{Cn}]|(?! )\p{Zs}/gu;

/** `text` in backquotes; beyond 40 code points its middle is left out. */
export function quote(text: string): string {
  const points = [...text.slice(0, 4000)];
  const short = points.length > 40 ? [...points.slice(0, 30), "…", ...points.slice(-9)].join("") : text;
  return `\`${visible(short)}\``;
}

/** Every character that cannot be seen replaced by its code point, as in `U+0007`. */
function visible(text: string): string {
  return text.replace(unseen, (character) => `U+${codePoint(character)}`);
}

function codePoint(character: string): string {
  return (character.codePointAt(0) ?? 0).toString(16).toUpperCase().padStart(4, "0");
}
