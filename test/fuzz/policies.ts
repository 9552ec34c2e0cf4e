/**
 * The loop that throws spoilt policies at the compiler: token soup, good policies with pieces cut, doubled, swapped or replaced,
 * and any characters at all. Whatever comes in, the answer is diagnostics whose spans lie inside their texts, and a policy
 * only where there is no error; small policies are compiled to machines too. A breach names the execution.
 */
import { compile } from "../../compiler/compile.ts";
import { hasErrors } from "../../grammar/diagnostic.ts";
import { placed, reservedWords, signs } from "../../grammar/tokens.ts";
import { type Fuzzed, type Random, seeded } from "../runtime/fuzz.ts";

const GOOD: readonly string[] = [
  "policy p\nzones x: low < 1 <= mid <= 2 < high\nassign high -> mid\nrule r = 3 high gap 1\nsignal s when r or 2 of 3 low restart\nprocess q: x ~ normal(0, 1)\nrequire arl(s, q) >= 5\nexpect s on high mid 2 high\n",
  'policy p\nletters v: ok, nok = "not ok"\nlet k = 2\nsignal s when k nok quiet for 3\nsignal t when [nok 0..2 ok nok] continue\nmissing break\nblocks of 4\n',
  "policy p\nzones x: a <= 0 < b\nletters v: c, d\ngroup g = {a & c, d}\nsignal s when 2 separate (g then b within 3) and not [c c] quiet until a\nclear after 3 d\nclear before a & d\nmissing x: as gone\ncadence 5 min\n",
  "let mu = 1 / 3\nzones x: a < mu <= b\nrule r = a unless 2 overlapping b within 2\n",
  'policy p\nzones n: few < 3 <= many\nsignal s when many\nprocess q(m from 1 to 2 by 0.5): n ~ poisson(m * sqrt(4))\nprocess w: n ~ {few 90%, many}\nrequire quantile(any, q(1), 0.5) <= 9\nallow signal_never "why not"\n',
];

const WORDS: readonly string[] = [
  ...reservedWords,
  ...Object.keys(placed),
  ...Object.values(signs).map(({ LABEL }) => LABEL ?? ""),
  ...'a b x low high s 0 1 2 7 0.5 5% 1e9 1e-400 99999999999999999999 3x . .. "t" " # // é 𝄞 \u0000 normal poisson sqrt arl any'.split(
    " ",
  ),
  "\n",
];

/** Runs `count` executions; throws on the first breach. */
export function fuzzPolicies(count: number, seed: number): Fuzzed {
  const random = seeded(seed);
  let accepted = 0;
  for (let execution = 0; execution < count; execution++) {
    const text = draw(random);
    try {
      if (isSound(text)) accepted++;
    } catch (thrown) {
      throw new Error(`execution ${execution} of seed ${seed}: ${JSON.stringify(text)}`, { cause: thrown });
    }
  }
  return { count, seed, accepted };
}

function draw(random: Random): string {
  const oneOf = (list: readonly string[]) => list[random(list.length)] as string;
  const way = random(8);
  if (way === 0)
    return Array.from({ length: random(40) }, () =>
      String.fromCharCode(random(random(4) ? 128 : 65536)),
    ).join("");
  if (way === 1) return Array.from({ length: random(25) }, () => oneOf(WORDS)).join(random(4) ? " " : "");
  const pieces = oneOf(GOOD).split(/(?<=\s)|(?=[\s:,(){}[\]])/);
  for (let left = 1 + random(3); left > 0; left--) {
    const at = random(pieces.length);
    const kind = random(4);
    if (kind === 0) pieces.splice(at, 1 + random(3));
    else if (kind === 1) pieces.splice(at, 0, `${oneOf(WORDS)} `);
    else if (kind === 2) pieces[at] = `${oneOf(WORDS)} `;
    else pieces.splice(at, 0, ...pieces.slice(random(pieces.length)).slice(0, 4));
  }
  return pieces.join("");
}

/** Compiles a text; whether it is right. Throws where what comes out is not sound. */
function isSound(text: string): boolean {
  const { policy, machine, diagnostics } = compile(text, { mostStates: 2000 });
  for (const { span, related, message } of diagnostics)
    for (const { start, end, source } of [span, ...(related ?? []).map((other) => other.span)])
      if (!(start >= 0 && start <= end && end <= source.text.length && message.length > 0))
        throw new Error(`a span from ${start} to ${end}: ${message}`);
  if (policy && !machine && !hasErrors(diagnostics)) throw new Error("neither a machine nor an error");
  if (machine && hasErrors(diagnostics)) throw new Error("a machine beside an error");
  return machine !== undefined;
}
