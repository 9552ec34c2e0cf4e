/** The grammar's rules for SETs, conditions and patterns. The second part of the parser; see `parser.ts`. */
import { ExpressionParser } from "./parser-expression.ts";
import { Name, reserved, signs, Whole } from "./tokens.ts";

export class ConditionParser extends ExpressionParser {
  protected readonly condition = this.RULE("condition", () => {
    this.SUBRULE(this.both);
    this.MANY(() => {
      this.CONSUME(reserved.or);
      this.SUBRULE1(this.both);
    });
  });

  protected readonly both = this.RULE("both", () => {
    this.SUBRULE(this.chain);
    this.MANY(() => {
      this.CONSUME(reserved.and);
      this.SUBRULE1(this.chain);
    });
  });

  protected readonly chain = this.RULE("chain", () => {
    this.SUBRULE(this.unary);
    this.MANY(() => this.SUBRULE(this.link));
  });

  protected readonly link = this.RULE("link", () => {
    this.OR([
      {
        ALT: () => {
          this.CONSUME(reserved.then);
          this.SUBRULE(this.unary);
          this.OPTION(() => {
            this.CONSUME(reserved.within);
            this.SUBRULE(this.count);
          });
        },
      },
      {
        ALT: () => {
          this.CONSUME(reserved.unless);
          this.SUBRULE1(this.unary);
          this.CONSUME1(reserved.within);
          this.SUBRULE1(this.count);
        },
      },
    ]);
  });

  protected readonly unary = this.RULE("unary", () => {
    this.OR([
      {
        ALT: () => {
          this.CONSUME(reserved.not);
          this.SUBRULE(this.unary);
        },
      },
      { ALT: () => this.SUBRULE(this.atom) },
    ]);
  });

  protected readonly atom = this.RULE("atom", () => {
    this.OR([
      {
        ALT: () => {
          this.CONSUME(signs.openParen);
          this.SUBRULE(this.condition);
          this.CONSUME(signs.closeParen);
        },
      },
      { ALT: () => this.SUBRULE(this.pattern) },
      { ALT: () => this.SUBRULE(this.counted) },
      { ALT: () => this.SUBRULE(this.set) },
    ]);
  });

  protected readonly counted = this.RULE("counted", () => {
    this.SUBRULE(this.count);
    this.OR([
      {
        ALT: () => {
          this.CONSUME(reserved.of);
          this.SUBRULE1(this.count, { LABEL: "window" });
          this.SUBRULE(this.set);
        },
      },
      {
        ALT: () => {
          this.CONSUME(reserved.separate, { LABEL: "repetition" });
          this.SUBRULE(this.atom);
        },
      },
      {
        ALT: () => {
          this.CONSUME(reserved.overlapping, { LABEL: "repetition" });
          this.SUBRULE1(this.atom);
        },
      },
      { ALT: () => this.SUBRULE(this.run) },
    ]);
  });

  protected readonly run = this.RULE("run", () => {
    this.SUBRULE(this.set);
    this.OPTION(() => {
      this.CONSUME(reserved.gap);
      this.SUBRULE(this.count);
      this.OPTION1(() => {
        this.CONSUME(reserved.of);
        this.SUBRULE1(this.set, { LABEL: "failures" });
      });
    });
  });

  protected readonly set = this.RULE("set", () => {
    this.SUBRULE(this.meet);
    this.MANY(() => {
      this.CONSUME(reserved.except);
      this.SUBRULE1(this.meet);
    });
  });

  protected readonly meet = this.RULE("meet", () => {
    this.SUBRULE(this.member);
    this.MANY(() => {
      this.CONSUME(signs.meet);
      this.SUBRULE1(this.member);
    });
  });

  protected readonly member = this.RULE("member", () => {
    this.OR([
      { ALT: () => this.CONSUME(reserved.any) },
      { ALT: () => this.CONSUME(Name) },
      { ALT: () => this.SUBRULE(this.union) },
    ]);
  });

  protected readonly union = this.RULE("union", () => {
    this.CONSUME(signs.openBrace);
    this.AT_LEAST_ONE_SEP({ SEP: signs.comma, DEF: () => this.SUBRULE(this.set) });
    this.CONSUME(signs.closeBrace);
  });

  protected readonly pattern = this.RULE("pattern", () => {
    this.CONSUME(signs.openBracket);
    this.SUBRULE(this.choice);
    this.CONSUME(signs.closeBracket);
  });

  protected readonly choice = this.RULE("choice", () => {
    this.AT_LEAST_ONE_SEP({ SEP: signs.choice, DEF: () => this.SUBRULE(this.sequence) });
  });

  protected readonly sequence = this.RULE("sequence", () => {
    this.AT_LEAST_ONE(() => this.SUBRULE(this.item));
  });

  protected readonly item = this.RULE("item", () => {
    this.OPTION(() => {
      this.CONSUME(Whole, { LABEL: "least" });
      this.OPTION1(() => {
        this.CONSUME(signs.rangeTo);
        this.OPTION2(() => this.CONSUME1(Whole, { LABEL: "most" }));
      });
    });
    this.OR([
      { ALT: () => this.SUBRULE(this.set) },
      {
        ALT: () => {
          this.CONSUME(signs.openParen);
          this.SUBRULE(this.choice);
          this.CONSUME(signs.closeParen);
        },
      },
    ]);
  });
}
