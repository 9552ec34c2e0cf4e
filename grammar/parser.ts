/**
 * The grammar of the language (`language.ebnf`) for Chevrotain: one declaration at a time, no actions, two tokens of
 * lookahead. Every word that begins a declaration is reserved and stands nowhere else, so `parse.ts` cuts the tokens into
 * declarations before they come here, and recovers by repairing the tokens of the one declaration that is wrong; that
 * finds several mistakes in one declaration and makes no cascades. Chevrotain's own recovery is therefore off.
 *
 * Rules carry the names of the grammar; where a rule holds several names of different use they are labelled. Alternatives
 * that begin with a name stand before those that begin with a word which may be a name. The class comes in four parts
 * (`parser-expression`, `parser-condition`, `parser-process`, this one) for their length alone.
 */
import { ProcessParser } from "./parser-process.ts";
import { Name, Numeral, placed, reserved, signs, Text } from "./tokens.ts";

export class Parser extends ProcessParser {
  constructor() {
    super();
    this.performSelfAnalysis();
  }

  readonly declaration = this.RULE("declaration", () => {
    this.OR([
      { ALT: () => this.SUBRULE(this.policy) },
      { ALT: () => this.SUBRULE(this.use) },
      { ALT: () => this.SUBRULE(this.let) },
      { ALT: () => this.SUBRULE(this.zones) },
      { ALT: () => this.SUBRULE(this.letters) },
      { ALT: () => this.SUBRULE(this.group) },
      { ALT: () => this.SUBRULE(this.assign) },
      { ALT: () => this.SUBRULE(this.rule) },
      { ALT: () => this.SUBRULE(this.signal) },
      { ALT: () => this.SUBRULE(this.clear) },
      { ALT: () => this.SUBRULE(this.missing) },
      { ALT: () => this.SUBRULE(this.blocks) },
      { ALT: () => this.SUBRULE(this.cadence) },
      { ALT: () => this.SUBRULE(this.process) },
      { ALT: () => this.SUBRULE(this.require) },
      { ALT: () => this.SUBRULE(this.expect) },
      { ALT: () => this.SUBRULE(this.allow) },
    ]);
  });

  protected readonly policy = this.RULE("policy", () => {
    this.CONSUME(reserved.policy);
    this.CONSUME(Name);
    this.OPTION(() => this.CONSUME(Text));
  });

  protected readonly use = this.RULE("use", () => {
    this.CONSUME(reserved.use);
    this.CONSUME(Text);
  });

  protected readonly let = this.RULE("let", () => {
    this.CONSUME(reserved.let);
    this.CONSUME(Name);
    this.CONSUME(signs.equal);
    this.SUBRULE(this.expression);
  });

  protected readonly zones = this.RULE("zones", () => {
    this.CONSUME(reserved.zones);
    this.CONSUME(Name);
    this.CONSUME(signs.colon);
    this.CONSUME1(Name, { LABEL: "letter" });
    this.AT_LEAST_ONE(() => {
      this.SUBRULE(this.cut);
      this.CONSUME2(Name, { LABEL: "letter" });
    });
  });

  protected readonly cut = this.RULE("cut", () => {
    this.SUBRULE(this.below);
    this.SUBRULE(this.expression);
    this.SUBRULE1(this.below);
  });

  protected readonly below = this.RULE("below", () => {
    this.OR([
      { ALT: () => this.CONSUME(signs.less, { LABEL: "sign" }) },
      { ALT: () => this.CONSUME(signs.atMost, { LABEL: "sign" }) },
    ]);
  });

  protected readonly letters = this.RULE("letters", () => {
    this.CONSUME(reserved.letters);
    this.CONSUME(Name);
    this.CONSUME(signs.colon);
    this.AT_LEAST_ONE_SEP({ SEP: signs.comma, DEF: () => this.SUBRULE(this.letterEntry) });
  });

  protected readonly letterEntry = this.RULE("letterEntry", () => {
    this.CONSUME(Name);
    this.OPTION(() => {
      this.CONSUME(signs.equal);
      this.CONSUME(Text);
    });
  });

  protected readonly group = this.RULE("group", () => {
    this.CONSUME(reserved.group);
    this.CONSUME(Name);
    this.CONSUME(signs.equal);
    this.SUBRULE(this.set);
  });

  protected readonly assign = this.RULE("assign", () => {
    this.CONSUME(reserved.assign);
    this.AT_LEAST_ONE_SEP({ SEP: signs.comma, DEF: () => this.SUBRULE(this.assignPair) });
  });

  protected readonly assignPair = this.RULE("assignPair", () => {
    this.SUBRULE(this.set);
    this.CONSUME(signs.arrow);
    this.SUBRULE1(this.set);
  });

  protected readonly rule = this.RULE("rule", () => {
    this.CONSUME(reserved.rule);
    this.CONSUME(Name);
    this.CONSUME(signs.equal);
    this.SUBRULE(this.condition);
  });

  protected readonly signal = this.RULE("signal", () => {
    this.CONSUME(reserved.signal);
    this.CONSUME(Name);
    this.CONSUME(placed.when);
    this.SUBRULE(this.condition);
    this.OPTION(() =>
      this.OR([
        { ALT: () => this.CONSUME(reserved.restart, { LABEL: "response" }) },
        { ALT: () => this.CONSUME(reserved.continue, { LABEL: "response" }) },
      ]),
    );
    this.OPTION1(() => this.SUBRULE(this.quiet));
  });

  protected readonly quiet = this.RULE("quiet", () => {
    this.CONSUME(reserved.quiet);
    this.OR([
      {
        ALT: () => {
          this.CONSUME(placed.for);
          this.SUBRULE(this.count);
        },
      },
      {
        ALT: () => {
          this.CONSUME(placed.until);
          this.SUBRULE(this.condition);
        },
      },
    ]);
  });

  protected readonly clear = this.RULE("clear", () => {
    this.CONSUME(reserved.clear);
    this.OR([
      {
        ALT: () => {
          this.CONSUME(placed.before);
          this.SUBRULE(this.set);
        },
      },
      {
        ALT: () => {
          this.CONSUME(placed.after);
          this.SUBRULE(this.condition);
        },
      },
    ]);
  });

  protected readonly missing = this.RULE("missing", () => {
    this.CONSUME(reserved.missing);
    this.OR([
      {
        ALT: () => {
          this.CONSUME(Name, { LABEL: "statistic" });
          this.CONSUME(signs.colon);
          this.CONSUME(placed.as);
          this.CONSUME1(Name, { LABEL: "letter" });
        },
      },
      { ALT: () => this.CONSUME(placed.refuse, { LABEL: "response" }) },
      { ALT: () => this.CONSUME(placed.skip, { LABEL: "response" }) },
      { ALT: () => this.CONSUME(placed.break, { LABEL: "response" }) },
    ]);
  });

  protected readonly blocks = this.RULE("blocks", () => {
    this.CONSUME(reserved.blocks);
    this.CONSUME(reserved.of);
    this.SUBRULE(this.count);
  });

  protected readonly cadence = this.RULE("cadence", () => {
    this.CONSUME(reserved.cadence);
    this.CONSUME(Numeral);
    this.CONSUME(Name);
  });

  protected readonly allow = this.RULE("allow", () => {
    this.CONSUME(reserved.allow);
    this.CONSUME(Name);
    this.CONSUME(Text);
  });
}
