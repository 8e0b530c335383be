/**
 * How files spell formulas that older programs do not know: prefixes before newer functions and names, and the add-in's
 * functions under the name they have while the add-in is not there ([MS-XLSX] 2.2.2; ECMA-376 part 1, 18.17.7).
 */
import { tokenize } from "@borgar/fx";
import { functionName } from "../engine/formula";

const NEWER = new Set(
  (
    "ACOT ACOTH ARABIC BASE BETA.DIST BETA.INV BINOM.DIST BINOM.INV BITAND BITLSHIFT BITOR BITRSHIFT BITXOR BYCOL BYROW CEILING.MATH CHISQ.DIST CHISQ.DIST.RT " +
    "CHISQ.INV CHISQ.INV.RT CHISQ.TEST CHOOSECOLS CHOOSEROWS COMBINA CONCAT CONFIDENCE.NORM CONFIDENCE.T COT COTH COVARIANCE.P COVARIANCE.S CSC CSCH DAYS DECIMAL DROP " +
    "ERF.PRECISE ERFC.PRECISE EXPAND EXPON.DIST F.DIST F.DIST.RT F.INV F.INV.RT FLOOR.MATH FORECAST.LINEAR FORMULATEXT GAMMA GAMMA.DIST GAMMA.INV GAMMALN.PRECISE GAUSS " +
    "HSTACK HYPGEOM.DIST IFNA IFS ISFORMULA ISO.CEILING ISOMITTED ISOWEEKNUM LAMBDA LET LOGNORM.DIST LOGNORM.INV MAKEARRAY MAP MAXIFS MINIFS MODE.MULT MODE.SNGL MUNIT NEGBINOM.DIST " +
    "NORM.DIST NORM.INV NORM.S.DIST NORM.S.INV NUMBERVALUE PDURATION PERCENTILE.EXC PERCENTILE.INC PERCENTRANK.EXC PERCENTRANK.INC PERMUTATIONA PHI POISSON.DIST " +
    "QUARTILE.EXC QUARTILE.INC RANDARRAY RANK.AVG RANK.EQ REDUCE RRI SCAN SEC SECH SEQUENCE SHEET SHEETS SKEW.P SORTBY STDEV.P STDEV.S SWITCH T.DIST T.DIST.2T T.DIST.RT T.INV " +
    "T.INV.2T TAKE TEXTAFTER TEXTBEFORE TEXTJOIN TEXTSPLIT TOCOL TOROW UNICHAR UNICODE UNIQUE VAR.P VAR.S VSTACK WEIBULL.DIST WRAPCOLS WRAPROWS XLOOKUP XMATCH XOR Z.TEST"
  ).split(" "),
);
const NEWER_IN_SHEETS = new Set(["FILTER", "SORT"]);

interface Token {
  readonly type: string;
  readonly value: string;
}

const tokens = (formula: string): Token[] => tokenize(formula, { withLocation: false, negativeNumbers: false });
const isReference = (token: Token | undefined): boolean => token !== undefined && (token.type === "range" || token.type === "range_beam");

/** "=CTMC.X(A1#)" as the file has it: "_xldudf_CTMC_X(_xlfn.ANCHORARRAY(A1))", without the equals sign. */
export function toFileSpelling(formula: string, namespace = "CTMC"): string {
  const list = tokens(formula.replace(/^=/, ""));
  const variables = declaredNames(list);
  let result = "";
  list.forEach((token, index) => {
    const next = list[index + 1];
    const before = list[index - 1];
    if (token.type === "func") result += functionInFile(token.value, namespace);
    else if (token.type === "range_named" && variables.has(token.value.toUpperCase())) result += `_xlpm.${token.value}`;
    else if (isReference(token) && next?.value === "#") result += `_xlfn.ANCHORARRAY(${token.value})`;
    else if (token.value === "#" && token.type === "operator" && isReference(before)) return;
    else if (token.value === "@" && isReference(next)) return;
    else if (isReference(token) && before?.value === "@") result += `_xlfn.SINGLE(${token.value})`;
    else result += token.value;
  });
  return result;
}

function functionInFile(written: string, namespace: string): string {
  const name = functionName(written);
  if (name.startsWith(`${namespace}.`)) return `_xldudf_${namespace}_${name.slice(namespace.length + 1)}`;
  if (NEWER_IN_SHEETS.has(name)) return `_xlfn._xlws.${name}`;
  return NEWER.has(name) ? `_xlfn.${name}` : written;
}

/** Names that LET and LAMBDA declare: a name right after their opening bracket or a comma at that depth, before the last part. */
function declaredNames(list: readonly Token[]): Set<string> {
  const names = new Set<string>();
  const open: (string | null)[] = [];
  const solid = list.filter((token) => token.type !== "whitespace" && token.type !== "newline");
  solid.forEach((token, index) => {
    if (token.value === "(") open.push(solid[index - 1]?.type === "func" ? functionName(solid[index - 1]!.value) : null);
    else if (token.value === "{") open.push(null);
    else if (token.value === ")" || token.value === "}") open.pop();
    else if (token.type === "range_named" && (open.at(-1) === "LET" || open.at(-1) === "LAMBDA")) {
      const before = solid[index - 1]!.value;
      if ((before === "(" || before === ",") && solid[index + 1]?.value === ",") names.add(token.value.toUpperCase());
    }
  });
  return names;
}

/** The spelling of a file as people write it; both spellings of the add-in's functions come out alike. */
export function fromFileSpelling(formula: string): string {
  const list = tokens(`=${formula.replace(/^=/, "")}`);
  let result = "";
  for (let index = 0; index < list.length; index++) {
    const token = list[index]!;
    if (token.type === "func") {
      const name = functionName(token.value);
      const [open, inner, close] = list.slice(index + 1, index + 4);
      if ((name === "ANCHORARRAY" || name === "SINGLE") && open?.value === "(" && isReference(inner) && close?.value === ")") {
        result += name === "SINGLE" ? `@${inner!.value}` : `${inner!.value}#`;
        index += 3;
      } else result += /^_xl/i.test(token.value) ? name : token.value;
    } else if (token.type === "range_named") result += token.value.replace(/^_xlpm\./i, "");
    else result += token.value;
  }
  return result;
}
