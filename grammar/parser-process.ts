/** The grammar's rules for processes, requirements and expectations. The third part of the parser; see `parser.ts`. */
import { ConditionParser } from "./parser-condition.ts";
import { Name, placed, reserved, signs, Whole } from "./tokens.ts";

export class ProcessParser extends ConditionParser {
  protected readonly process = this.RULE("process", () => {
    this.CONSUME(reserved.process);
    this.CONSUME(Name);
    this.OPTION(() => {
      this.CONSUME(signs.openParen);
      this.AT_LEAST_ONE_SEP({ SEP: signs.comma, DEF: () => this.SUBRULE(this.sweep) });
      this.CONSUME(signs.closeParen);
    });
    this.CONSUME(signs.colon);
    this.AT_LEAST_ONE_SEP1({ SEP: signs.comma, DEF: () => this.SUBRULE(this.law) });
  });

  protected readonly sweep = this.RULE("sweep", () => {
    this.CONSUME(Name);
    this.CONSUME(placed.from);
    this.SUBRULE(this.expression);
    this.CONSUME(placed.to);
    this.SUBRULE1(this.expression);
    this.CONSUME(placed.by);
    this.SUBRULE2(this.expression);
  });

  protected readonly law = this.RULE("law", () => {
    this.CONSUME(Name, { LABEL: "statistic" });
    this.CONSUME(signs.follows);
    this.SUBRULE(this.model);
    this.OPTION(() => {
      this.CONSUME(placed.with);
      this.CONSUME1(Name, { LABEL: "letter" });
      this.SUBRULE(this.expression);
    });
  });

  protected readonly model = this.RULE("model", () => {
    this.OR([
      { ALT: () => this.SUBRULE(this.mass) },
      {
        ALT: () => {
          this.CONSUME(placed.markov);
          this.CONSUME(signs.openBrace);
          this.AT_LEAST_ONE_SEP({ SEP: signs.comma, DEF: () => this.SUBRULE(this.markovRow) });
          this.CONSUME(signs.closeBrace);
        },
      },
      { ALT: () => this.SUBRULE(this.distribution) },
    ]);
  });

  protected readonly markovRow = this.RULE("markovRow", () => {
    this.CONSUME(Name);
    this.CONSUME(signs.arrow);
    this.SUBRULE(this.mass);
  });

  protected readonly mass = this.RULE("mass", () => {
    this.CONSUME(signs.openBrace);
    this.AT_LEAST_ONE_SEP({ SEP: signs.comma, DEF: () => this.SUBRULE(this.massEntry) });
    this.CONSUME(signs.closeBrace);
  });

  protected readonly massEntry = this.RULE("massEntry", () => {
    this.CONSUME(Name);
    this.OPTION(() => this.SUBRULE(this.expression));
  });

  protected readonly distribution = this.RULE("distribution", () => {
    this.CONSUME(Name);
    this.SUBRULE(this.operands);
    this.OPTION(() =>
      this.OR([
        {
          ALT: () => {
            this.CONSUME(placed.ar);
            this.SUBRULE(this.expression);
          },
        },
        { ALT: () => this.SUBRULE(this.estimated) },
      ]),
    );
  });

  protected readonly estimated = this.RULE("estimated", () => {
    this.CONSUME(placed.estimated);
    this.CONSUME(placed.from);
    this.SUBRULE(this.count);
    this.CONSUME(placed.subgroups);
    this.CONSUME(reserved.of);
    this.SUBRULE1(this.count);
    this.OPTION(() => {
      this.CONSUME(placed.under);
      this.SUBRULE(this.processAt);
    });
  });

  protected readonly require = this.RULE("require", () => {
    this.CONSUME(reserved.require);
    this.SUBRULE(this.measure);
    this.OR([
      {
        ALT: () => {
          this.SUBRULE(this.comparison);
          this.SUBRULE(this.expression);
        },
      },
      {
        ALT: () => {
          this.CONSUME(signs.equal);
          this.SUBRULE1(this.expression);
          this.CONSUME(reserved.within);
          this.SUBRULE2(this.expression);
        },
      },
    ]);
  });

  protected readonly comparison = this.RULE("comparison", () => {
    this.OR([
      { ALT: () => this.CONSUME(signs.atLeast, { LABEL: "sign" }) },
      { ALT: () => this.CONSUME(signs.atMost, { LABEL: "sign" }) },
      { ALT: () => this.CONSUME(signs.more, { LABEL: "sign" }) },
      { ALT: () => this.CONSUME(signs.less, { LABEL: "sign" }) },
    ]);
  });

  protected readonly measure = this.RULE("measure", () => {
    this.CONSUME(Name);
    this.OPTION(() => {
      this.CONSUME(signs.openParen);
      this.SUBRULE(this.signalReference);
      this.CONSUME(signs.comma);
      this.SUBRULE(this.processReference);
      this.OPTION1(() => {
        this.CONSUME1(signs.comma);
        this.SUBRULE(this.expression);
      });
      this.CONSUME(signs.closeParen);
    });
  });

  protected readonly signalReference = this.RULE("signalReference", () => {
    this.OR([
      { ALT: () => this.CONSUME(reserved.any, { LABEL: "signal" }) },
      { ALT: () => this.CONSUME(Name, { LABEL: "signal" }) },
    ]);
  });

  protected readonly processReference = this.RULE("processReference", () => {
    this.SUBRULE(this.processAt);
    this.OPTION(() => {
      this.CONSUME(placed.after);
      this.SUBRULE1(this.processAt);
    });
  });

  protected readonly processAt = this.RULE("processAt", () => {
    this.CONSUME(Name);
    this.OPTION(() => this.SUBRULE(this.operands));
  });

  protected readonly expect = this.RULE("expect", () => {
    this.CONSUME(reserved.expect);
    this.OR([
      { ALT: () => this.CONSUME(reserved.quiet) },
      { ALT: () => this.CONSUME(reserved.any, { LABEL: "signal" }) },
      { ALT: () => this.CONSUME(Name, { LABEL: "signal" }) },
    ]);
    this.CONSUME(placed.on);
    this.AT_LEAST_ONE(() => this.SUBRULE(this.trial));
  });

  protected readonly trial = this.RULE("trial", () => {
    this.OPTION(() => this.CONSUME(Whole));
    this.OR([{ ALT: () => this.SUBRULE(this.place) }, { ALT: () => this.SUBRULE(this.tuple) }]);
    this.OPTION1(() => {
      this.CONSUME(signs.arrow);
      this.SUBRULE(this.raises);
    });
  });

  protected readonly tuple = this.RULE("tuple", () => {
    this.CONSUME(signs.openParen);
    this.AT_LEAST_ONE_SEP({ SEP: signs.comma, DEF: () => this.SUBRULE(this.place) });
    this.CONSUME(signs.closeParen);
  });

  protected readonly place = this.RULE("place", () => {
    this.OR([{ ALT: () => this.CONSUME(Name) }, { ALT: () => this.CONSUME(signs.unknown) }]);
  });

  protected readonly raises = this.RULE("raises", () => {
    this.OR([
      { ALT: () => this.CONSUME(Name) },
      {
        ALT: () => {
          this.CONSUME(signs.openBrace);
          this.AT_LEAST_ONE_SEP({ SEP: signs.comma, DEF: () => this.CONSUME1(Name) });
          this.CONSUME(signs.closeBrace);
        },
      },
    ]);
  });
}
