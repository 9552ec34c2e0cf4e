/** The grammar's rules for numbers: expressions and counts. The first part of the parser; see `parser.ts`. */
import { CstParser } from "chevrotain";
import { Name, Numeral, signs, vocabulary, Whole } from "./tokens.ts";

/** Defined by the build, which has tested what the validations would tell. */
declare const TOCSIN_BUILT: boolean | undefined;

export class ExpressionParser extends CstParser {
  constructor() {
    super(vocabulary, {
      maxLookahead: 2,
      nodeLocationTracking: "onlyOffset",
      recoveryEnabled: false,
      skipValidations: typeof TOCSIN_BUILT !== "undefined" && TOCSIN_BUILT,
    });
  }

  protected readonly expression = this.RULE("expression", () => {
    this.SUBRULE(this.term);
    this.MANY(() => {
      this.OR([
        { ALT: () => this.CONSUME(signs.plus, { LABEL: "sign" }) },
        { ALT: () => this.CONSUME(signs.minus, { LABEL: "sign" }) },
      ]);
      this.SUBRULE1(this.term);
    });
  });

  protected readonly term = this.RULE("term", () => {
    this.SUBRULE(this.signed);
    this.MANY(() => {
      this.OR([
        { ALT: () => this.CONSUME(signs.times, { LABEL: "sign" }) },
        { ALT: () => this.CONSUME(signs.over, { LABEL: "sign" }) },
      ]);
      this.SUBRULE1(this.signed);
    });
  });

  protected readonly signed = this.RULE("signed", () => {
    this.OR([
      {
        ALT: () => {
          this.CONSUME(signs.minus);
          this.SUBRULE(this.signed);
        },
      },
      {
        ALT: () => {
          this.SUBRULE(this.primary);
          this.OPTION(() => {
            this.CONSUME(signs.power);
            this.SUBRULE1(this.signed);
          });
        },
      },
    ]);
  });

  protected readonly primary = this.RULE("primary", () => {
    this.OR([
      {
        ALT: () => {
          this.CONSUME(Numeral);
          this.OPTION(() => this.CONSUME(signs.percent));
        },
      },
      {
        ALT: () => {
          this.CONSUME(Name);
          this.OPTION1(() => this.SUBRULE(this.operands));
        },
      },
      {
        ALT: () => {
          this.CONSUME(signs.openParen);
          this.SUBRULE(this.expression);
          this.CONSUME(signs.closeParen);
        },
      },
    ]);
  });

  protected readonly operands = this.RULE("operands", () => {
    this.CONSUME(signs.openParen);
    this.AT_LEAST_ONE_SEP({ SEP: signs.comma, DEF: () => this.SUBRULE(this.expression) });
    this.CONSUME(signs.closeParen);
  });

  protected readonly count = this.RULE("count", () => {
    this.OR([{ ALT: () => this.CONSUME(Whole) }, { ALT: () => this.CONSUME(Name) }]);
  });
}
