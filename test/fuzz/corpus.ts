// What the fuzz loop of policies begins with: declarations of every kind that are right beside `BASE`, few enough tokens
// each that a million executions are a matter of minutes; words to put where they may not belong; and a library.

/** Two alphabets of few letters, and what the declarations below mention. */
export const BASE: readonly string[] = [
  "zones x: low < 0 <= mid < 2 <= high",
  'letters v: good, bad = "NOK"',
  "signal s when high",
];

export const DECLARATIONS: readonly string[] = [
  "let mu = 1/2 - 3%",
  "let sd = sqrt(2) * 0.5",
  "let odd = upper(normal(0, 1), 5%)",
  "let k = min(3, max(2, abs(-2)))",
  "let pow = (1 + 2)^3 / c4(5) + pi",
  "group far = {low, high}",
  "group both = high & bad",
  "group rest = any except {low, good & mid}",
  "assign high -> mid, low -> {mid}",
  "rule run2 = 2 high",
  "rule weak = 3 high gap 1",
  "rule named = 2 low gap 2 of mid",
  "rule scan = 2 of 4 {high, low}",
  "rule pat = [high 1..2 mid (low | 2 bad) 1.. high]",
  "rule maybe = [high 0..1 mid]",
  "rule also = run2 or low",
  "rule sep = 2 separate (2 high)",
  "rule over = 2 overlapping [high mid]",
  "rule next = high then 2 low within 4",
  "rule hush = high unless low within 3",
  "rule mix = high and not bad or 2 low and good",
  "signal t when 2 low restart",
  "signal u when [high low] continue quiet for 2",
  "signal w when bad then good quiet until 2 mid",
  "signal never when high and low",
  "clear before bad",
  "clear after 2 good",
  "missing break",
  "missing skip",
  "missing x: as low",
  "missing v: as lost",
  "blocks of 3",
  "cadence 15 min",
  "cadence 1/2 week",
  "process p: x ~ normal(0, 1), v ~ {good 0.9, bad}",
  "process q(d from 0 to 1 by 0.5): x ~ normal(d, 1), v ~ {good 1/3, bad 2/3}",
  "process g(a from 0 to 1 by 1, b from 1 to 2 by 1): x ~ laplace(a, b), v ~ {good 1, bad}",
  "process c: x ~ poisson(1), v ~ markov {good -> {good 0.5, bad 0.5}, bad -> {good}}",
  "process e: x ~ normal(0, 1) estimated from 20 subgroups of 4 under p, v ~ {good, bad 1%}",
  "process r: x ~ normal(0, 1) ar 0.3, v ~ {good, bad 1e-3}",
  "process m: x ~ student(4, 0, 1), v ~ {good, bad 0.25} with lost 1%",
  "require arl(s, p) >= 2",
  "require mrl(any, q(0.5)) = 2 within 50%",
  "require signalled(s, q, 10) > 5%",
  "require arl(s, q(1) after p) <= 100",
  "require quantile(s, p, 0.9) < 1e3",
  "require rate(s, p) <= 1",
  "require states <= 9",
  "expect s on (mid, good) (high, bad)",
  "expect quiet on 2 (mid, good) ? (low, bad)",
  "expect all on (high, good) -> s (low, good) (high, bad) -> {s}",
  'allow signal_never "kept"',
  'allow name_case "kept"',
  'policy named "A title"',
  'use "lib.tocsin"',
  "# a comment",
  "rule Low = low",
];

export const LIBRARY = "rule twice = 2 high\ngroup calm = mid except bad\n";

/** To be put in place of one another. */
export const NUMBERS: readonly string[] = "0 1 2 3 5 12 0.5 1e3".split(" ");
export const NAMES: readonly string[] =
  "x v low mid high good bad lost far both weak pat run2 s t mu sd k p q g any".split(" ");

/** Tokens and what looks like one, to be put anywhere. */
export const WORDS: readonly string[] = [
  ..."policy use let zones letters group assign rule signal clear missing blocks cadence process require expect allow".split(" "),
  ..."and or not then unless within any except restart continue quiet of gap separate overlapping".split(" "),
  ..."when on as from to by ar after before until for all skip break refuse with estimated subgroups under".split(" "),
  ..."normal poisson markov exceedance signed_rank upper lower sqrt ln exp c4 d2 d3 pi arl mrl states rate".split(" "),
  ..."x v low mid high good bad s t p q d mu sd k run2 far twice lib __proto__ constructor High".split(" "),
  ..."0 1 2 3 7 31 0.5 1.5 1e9 1e-9 5% 100% 1000000 99999999999999999999 1e400 .5 3x 007 1.".split(" "),
  ..."( ) [ ] { } | & , : ; = == < <= > >= != -> ~ ? + - * / ^ .. ... % # $ @ ! \" ' ` \\ \u201c \u2264 \u00d7 \u00e9".split(" "),
  ...['"text"', '"lib.tocsin"', '"../x.tocsin"', '""', '"open', "# note\n", "// note\n", "\n", "\n\n", "\r\n", "\t", "\0", "\uFEFF", "\uD800", "\u{1D11E}", "min", "h", "day"],
]; // biome-ignore format: a kind a line
