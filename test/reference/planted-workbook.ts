import type { SheetFacts } from "../../src/audit/facts";

/**
 * A workbook with faults planted on purpose, all data invented for this project: the yards, ferries and clinic of a harbour town
 * that does not exist. Every sheet holds one table (or a formula over another sheet's) in one of the layouts that people keep. `faults`
 * lists what a careful colleague would have to say, by the numbers of the list of thirty mistakes; "also" is its last line.
 */
export type Typed = string | number | null | readonly [formula: string, value: string | number];

export interface PlantedFault {
  readonly mistake: number | "also";
  /** Finding codes of which one has to be there. */
  readonly codes: readonly string[];
  /** Where it has to point, relative to the audited range; any place when left out. */
  readonly at?: readonly [row: number, column: number];
}

export interface PlantedSheet {
  readonly name: string;
  readonly layout: string;
  /** The range that its owner selects; the whole sheet when left out. Row, column, rows, columns. */
  readonly range?: readonly [number, number, number, number];
  readonly lines: readonly (readonly Typed[])[];
  readonly facts?: Pick<SheetFacts, "hiddenRows" | "hiddenColumns" | "merged" | "calculation">;
  /** Number formats by "row,column" of the sheet. */
  readonly formats?: Readonly<Record<string, string>>;
  readonly faults: readonly PlantedFault[];
  /** What a formula says when it refuses the same range for the same reason: no alarm of its own. */
  readonly refusals?: readonly string[];
}

const B = null;

export const plantedWorkbook: readonly PlantedSheet[] = [
  {
    name: "Crane 1", layout: "square, minus exits on the diagonal",
    lines: [["from/to", "Lifting", "Slewing", "Broken"], ["Lifting", -3.2, 3, 0.02], ["Slewing", 4, -4.1, 0.1], ["Broken", 0.5, 0, -0.5]],
    faults: [{ mistake: 1, codes: ["rowSum"], at: [1, 1] }],
  },
  {
    name: "Crane 2", layout: "square, minus exits on the diagonal",
    lines: [["from/to", "Lifting", "Slewing", "Broken"], ["Lifting", -3.33, 3.167, 0.167], ["Slewing", 4, 4.1, 0.1], ["Broken", 0.5, 0, -0.5]],
    faults: [{ mistake: 14, codes: ["rowSumRounded", "rowSum"], at: [1, 1] }, { mistake: 3, codes: ["diagonalPositive"], at: [2, 2] }],
  },
  {
    name: "Crane 3", layout: "square, blank diagonal",
    lines: [["", "Lifting", "Slewing", "Broken"], ["Lifting", B, 3, -0.02], ["Slewing", 4, B, "0,1"], ["Broken", "0.5\u00a0", B, B]],
    faults: [
      { mistake: 13, codes: ["rateNegative"], at: [1, 3] },
      { mistake: 22, codes: ["rateIsText"], at: [2, 3] },
    ],
  },
  {
    name: "Crane 4", layout: "square, blank diagonal",
    lines: [["", "Lifting", "Slewing", "Broken"], ["Lifting", B, 3, 0.02], ["Slewing", 4, B, 0.1], ["Broken", 0.5, 0, B]],
    faults: [{ mistake: 2, codes: ["diagonalBlank"] }, { mistake: 4, codes: ["largestArrow"] }],
  },
  {
    name: "Crane 5", layout: "transposed",
    lines: [["", "Lifting", "Slewing", "Broken"], ["Lifting", -3.02, 4, 0.5], ["Slewing", 3, -4.1, 0], ["Broken", 0.02, 0.1, -0.5]],
    faults: [{ mistake: 4, codes: ["columnsSum"] }],
    refusals: ["rowSum"],
  },
  {
    name: "Ward", layout: "probabilities per cycle",
    lines: [["", "Stable", "Relapse", "Dead"], ["Stable", 0.9, 0.08, 0.02], ["Relapse", 0.3, 0.6, 0.11], ["Dead", 0, 0, 1]],
    faults: [{ mistake: 5, codes: ["probabilityTable"] }, { mistake: 14, codes: ["probabilitySums"], at: [2, 1] }],
    refusals: ["diagonalPositive"],
  },
  {
    name: "Loans", layout: "probabilities per cycle",
    lines: [["", "Sound", "Watch", "Default"], ["Sound", 93.2, 6, 0.8], ["Watch", 11, 81.5, 7.5], ["Default", 0, 0, 100]],
    faults: [{ mistake: 6, codes: ["percentTable"] }],
    refusals: ["diagonalPositive"],
  },
  {
    name: "Gate", layout: "square, blank diagonal",
    lines: [["", "Open", "Jammed", "Closed for good"], ["Open", B, 0.12, 5], ["Jammed", 0.9, B, 0.03], ["Closed for good", B, B, B]],
    formats: { "1,2": "0%" },
    faults: [{ mistake: 6, codes: ["percentMixed"], at: [1, 2] }],
  },
  {
    name: "Ferry", layout: "square, blank diagonal",
    lines: [["annual probability", "Sailing", "Docked"], ["Sailing", B, 0.2], ["Docked", 0.6, B]],
    faults: [{ mistake: 7, codes: ["probabilityLabel"] }],
  },
  {
    name: "Ferry 2", layout: "list with further columns",
    lines: [["From", "To", "Risk per year", "Source"], ["Sailing", "Docked", 0.2, "log"], ["Docked", "Sailing", 0.6, "log"]],
    faults: [{ mistake: 7, codes: ["probabilityLabel"] }],
    refusals: ["listTooWide", "listWithMore"],
  },
  {
    name: "Clinic", layout: "probabilities per cycle",
    lines: [["", "Well", "Ill", "Dead"], ["Well", -0.1441, 0.5934, 0.5507], ["Ill", 0.2, 0.8, 0], ["Dead", 0, 0, 1]],
    faults: [{ mistake: 8, codes: ["competingExits"], at: [1, 1] }],
    refusals: ["rowSum"],
  },
  {
    name: "Clinic 2", layout: "square, blank diagonal",
    lines: [["", "Well", "Ill", "Dead"], ["Well", B, ["=1-EXP(-G2)", 0.2592], ["=1-EXP(-H2)", 0.3935]], ["Ill", 0.4, B, 0.1], ["Dead", B, B, B]],
    faults: [{ mistake: 8, codes: ["competingFormulas"], at: [1, 2] }],
  },
  {
    name: "Year", layout: "probabilities per cycle",
    lines: [["", "Good", "Fair", "Default"], ["Good", 0.7, 0.2, 0.1], ["Fair", 0.15, 0.6, 0.25], ["Default", 0, 0, 1]],
    faults: [{ mistake: 5, codes: ["probabilityTable"] }],
    refusals: ["diagonalPositive"],
  },
  {
    name: "Month", layout: "probabilities per cycle",
    lines: [["", "Good", "Fair", "Default"], ["Good", 0.975, 1 / 60, 1 / 120], ["Fair", 0.0125, 1 - 0.4 / 12, 0.25 / 12], ["Default", 0, 0, 1]],
    faults: [{ mistake: 9, codes: ["cycleLength"] }, { mistake: 5, codes: ["probabilityTable"] }],
    refusals: ["diagonalPositive"],
  },
  {
    name: "Pumps", layout: "list with further columns",
    lines: [["From", "To", "Rate", "Unit", "Source"], ["Up", "Down", 0.5, "per year", "plate"], ["Down", "Up", 0.125, "per h", "log"]],
    faults: [{ mistake: 10, codes: ["unitsDiffer"] }],
    refusals: ["listTooWide", "listWithMore"],
  },
  {
    name: "Pumps 2", layout: "square, minus exits on the diagonal",
    lines: [["MTBF in years, MTTR in h", "Up", "Down"], ["Up", -0.5, 0.5], ["Down", 4380, -4380]],
    faults: [{ mistake: 10, codes: ["unitsDiffer"] }, { mistake: 10, codes: ["rateSpread"] }, { mistake: 11, codes: ["meanTimes"] }],
  },
  {
    name: "Pumps 3", layout: "mean times in a list",
    lines: [["From", "To", "MTTR (h)"], ["Up", "Down", 400], ["Down", "Up", 8]],
    faults: [{ mistake: 11, codes: ["meanTimes"] }],
  },
  {
    name: "Pumps 4", layout: "square, blank diagonal",
    lines: [["from/to", "Up", "Down"], ["Up", B, 400], ["Down", 8, B]],
    faults: [{ mistake: 11, codes: ["largestArrow"] }],
  },
  {
    name: "Belt", layout: "square, minus exits on the diagonal",
    lines: [["per h", "Moving", "Stopped"], ["Moving", -0.004, 0.004], ["Stopped", 0.5, -0.5]],
    faults: [{ mistake: 12, codes: ["horizonUnit"] }, { mistake: 17, codes: ["noTarget"] }],
  },
  {
    name: "Belt plan", layout: "formulas", range: [0, 0, 0, 0],
    lines: [["Availability in ten years of hours", ["=CTMC.AVAILABILITY(Belt!A1:C3,\"Moving\",,9E7)", 0.99]], ["Time to stop", ["=CTMC.MEANABSORPTION(Belt!A1:C3)", "#VALUE!"]]],
    faults: [],
  },
  {
    name: "Buoys", layout: "square, blank diagonal",
    lines: [["", "Lit", "Dim", "Relit", "Adrift", "Lost"], ["Lit", B, 0.2, 0, 0, 0.01], ["Dim", 0.9, B, 0, 0, 0.05], ["Relit", 1, 0, B, 0, 0], ["Adrift", 0, 0, 0, B, 1], ["Lost", B, B, B, B, B]],
    faults: [{ mistake: 15, codes: ["unreachable"], at: [3, 1] }],
  },
  {
    name: "Winch", layout: "names on one side",
    lines: [["Hauling", B, 0.3, 0.1], ["Idle", 2, B, 0.02], ["Overhaul", B, B, B]],
    faults: [{ mistake: 16, codes: ["noExit"], at: [2, 1] }],
  },
  {
    name: "Two berths", layout: "list",
    lines: [["From", "To", "Rate per day"], ["East free", "East taken", 3], ["East taken", "East free", 2], ["West free", "West taken", 1], ["West taken", "West free", 4]],
    faults: [{ mistake: 18, codes: ["closedClasses"] }, { mistake: 15, codes: ["unreachable"] }],
  },
  {
    name: "Tugs", layout: "square with totals and notes",
    lines: [["", "Ready", "Towing", "Yard", "Total", "Note"], ["Ready", 0, 2, 0.1, 2.1, "log"], ["Towing", 3, 0, 0.2, 3.2, "log"], ["Yard", 0.5, 0, 0, 0.5, "guess"], ["Total", 3.5, 2, 0.3, 5.8, ""]],
    faults: [{ mistake: 19, codes: ["totalsSelected"] }],
    refusals: ["notSquare", "linesAside"],
  },
  {
    name: "Tugs 2", layout: "without names",
    lines: [[0, 2, 0.1, 2.1], [3, 0, 0.2, 3.2], [0.5, 0, 0, 0.5]],
    faults: [{ mistake: 19, codes: ["totalsSelected"], at: [0, 3] }],
    refusals: ["notSquare"],
  },
  {
    name: "Tugs 3", layout: "square, blank diagonal",
    lines: [["", "Ready", "Towing", "Total"], ["Ready", B, 2, 2], ["Towing", 3, B, 3], ["Total", 3, 2, 5]],
    faults: [{ mistake: 19, codes: ["totalsSelected"] }],
    refusals: ["diagonalPositive"],
  },
  {
    name: "Lock", layout: "square, minus exits on the diagonal", range: [0, 0, 4, 4],
    lines: [["per h", "Filling", "Full", "Draining", "Stuck"], ["Filling", -4, 4, 0, 0], ["Full", 0, -2.1, 2, 0.1], ["Draining", 3, 0, -3, 0], ["Stuck", 0, 0.5, 0, -0.5]],
    faults: [{ mistake: 20, codes: ["rangeShort"] }],
    refusals: ["rowSumRounded"],
  },
  {
    name: "Lock 2", layout: "square, blank diagonal", range: [0, 0, 5, 4],
    lines: [["", "Filling", "Full", "Draining", "Stuck"], ["Filling", B, 4, 0, 0], ["Full", 0, B, 2, 0.1], ["Draining", 3, 0, B, 0], ["Stuck", 0, 0.5, 0, B]],
    faults: [{ mistake: 20, codes: ["rangeShort"] }],
    refusals: ["notSquare"],
  },
  {
    name: "Lock plan", layout: "formulas", range: [0, 0, 0, 0],
    lines: [["Long run", ["=CTMC.STATIONARY(Lock!A1:D4)", "#VALUE!"]]],
    faults: [{ mistake: 20, codes: ["formulaShort"] }],
  },
  {
    name: "Sluice", layout: "square, blank diagonal",
    lines: [["", "Open", "Shut", "Leaking"], ["Open", B, 2, 0.1], ["Leaking", 0.5, B, 0.2], ["Shut", 1, 0.4, B]],
    faults: [{ mistake: 21, codes: ["headingsDiffer"], at: [2, 0] }],
  },
  {
    name: "Sluice 2", layout: "names on one side",
    lines: [["Open", "Shut", "open "], [B, 2, 0.1], [0.5, B, 0.2], [1, 0.4, B]],
    faults: [{ mistake: 21, codes: ["nameRepeated"] }],
  },
  {
    name: "Radar", layout: "list",
    lines: [["From", "To", "Rate per h"], ["On", "Off", 0.002], ["Off", "On", "1 200"], ["On", "Faulty", 0.0001], ["Faulty", "On", 0.2], ["On", "Off", 0.004]],
    faults: [{ mistake: 22, codes: ["rateIsText"], at: [2, 2] }, { mistake: "also", codes: ["arrowRepeated"] }],
  },
  {
    name: "Radar 2", layout: "list",
    lines: [["From", "To", "Rate per h"], ["On", "Off", 0.002], ["Off", "On", 0.5], ["On", "Struck by lightning", 0], ["Struck by lightning", "On", 0.1]],
    faults: [{ mistake: "also", codes: ["zeroEvents"], at: [3, 2] }],
  },
  {
    name: "Depot", layout: "square, blank diagonal",
    lines: [["", "In service", "Workshop", "Spare"], ["In service", B, 0.2, 0], ["Workshop", 0.7, B, B], ["Spare", 2, 0, B]],
    facts: { hiddenRows: [2], hiddenColumns: [] },
    faults: [{ mistake: 23, codes: ["blanksAmongZeros"], at: [2, 3] }, { mistake: 24, codes: ["hiddenLines"], at: [2, 0] }, { mistake: 15, codes: ["unreachable"], at: [3, 1] }],
  },
  {
    name: "Depot 2", layout: "two-row heading",
    lines: [["Vehicle states", B, B, B], ["", "In service", "Workshop", "Spare"], ["In service", B, 0.2, B], ["Workshop", 0.7, B, B], ["Spare", 2, B, B]],
    facts: { merged: [{ row: 0, column: 0, rows: 1, columns: 4 }, { row: 2, column: 2, rows: 1, columns: 2 }], calculation: "manual" },
    faults: [{ mistake: 25, codes: ["mergedCells"], at: [2, 2] }, { mistake: 26, codes: ["manualCalculation"] }],
    refusals: ["linesAside", "notSquare", "unreachable"],
  },
  {
    name: "Buses", layout: "square, blank diagonal",
    lines: [["1/h", "Driving", "Charging", "Garage"], ["Driving", B, ["=1/G2", 0.25], ["=1/G3", 0.02]], ["Charging", ["=1/G4", 0.9], B, 0.013], ["Garage", ["=1/G5", 0.3], ["=1/G6", 0.05], B]],
    faults: [{ mistake: 26, codes: ["pastedConstants"], at: [2, 3] }],
  },
  {
    name: "Trams", layout: "probabilities per cycle",
    lines: [["P(t)", "Out", "In"], ["Out", ["=EXP(G2*2)", 0.6703], ["=EXP(H2*2)", 1.4918]], ["In", ["=EXP(G3*2)", 2.7183], ["=EXP(H3*2)", 0.3679]]],
    faults: [{ mistake: 27, codes: ["exponentialCells"] }],
    refusals: ["diagonalPositive", "outsideUnit"],
  },
  {
    name: "Trams 2", layout: "probabilities per cycle",
    lines: [["", "Out", "In", "Scrapped"], ["Out", 0.1, 0.8, 0.1], ["In", 1.6, -0.6, 0], ["Scrapped", 0, 0, 1]],
    faults: [{ mistake: 27, codes: ["linearSteps"] }],
    refusals: ["diagonalPositive"],
  },
  {
    name: "Trams 3", layout: "square, minus exits on the diagonal",
    lines: [["per day", "Out", "In", "Scrapped"], ["Out", -0.5, 0.4, 0.1], ["In", 0.8, -0.8, 0], ["Scrapped", 0, 0, 0]],
    faults: [],
  },
  {
    name: "Trams 3 plan", layout: "formulas", range: [0, 0, 0, 0],
    lines: [["After a week", ["=EXP('Trams 3'!B2:D4*7)", 0.03]]],
    faults: [{ mistake: 27, codes: ["exponentialsOverTable"] }],
  },
  {
    name: "Sets", layout: "square, minus exits on the diagonal",
    lines: [["per h", "0 down", "1 down", "2 down", "3 down"], ["0 down", -0.1, 0.1, 0, 0], ["1 down", 1, -1.1, 0.1, 0], ["2 down", 0, 2, -2.1, 0.1], ["3 down", 0, 0, 3, -3]],
    faults: [{ mistake: 28, codes: ["failuresIgnoreUnits"], at: [1, 2] }, { mistake: 28, codes: ["crewsUnlimited"] }, { mistake: 29, codes: ["commonCause"] }],
  },
  {
    name: "Sets 2", layout: "names on one side",
    lines: [["3 working", "2 working", "1 working", "0 working"], [B, 0.3, 0, 0], [1, B, 0.2, 0], [1, 0, B, 0.1], [0, 0, 1, B]],
    faults: [{ mistake: 28, codes: ["repairMendsSeveral"], at: [3, 0] }, { mistake: 29, codes: ["commonCause"] }],
  },
  {
    name: "Cable", layout: "square, minus exits on the diagonal",
    lines: [["per year", "Whole", "Cut"], ["Whole", -0.05, 0.05], ["Cut", 0.2, -0.2]],
    faults: [{ mistake: 30, codes: ["longRunNotReached"] }],
  },
  {
    name: "Cable plan", layout: "formulas", range: [0, 0, 0, 0],
    lines: [["Share whole", ["=CTMC.STATIONARY(Cable!A1:C3)", 0.8], 0.2], ["At two years", ["=CTMC.DISTRIBUTION(Cable!A1:C3,1,2)", 0.92], 0.08], ["MTBF", ["=CTMC.MEANABSORPTION(Cable!A1:C3,\"Cut\")", 20]]],
    faults: [{ mistake: "also", codes: ["firstFailureAsBetween"] }],
  },
  {
    name: "Nets", layout: "counts beside time",
    lines: [["", "Dry", "Wet", "Torn", "Time in state"], ["Dry", 0, 12, 1, 410], ["Wet", 11, 0, 2, 230], ["Torn", 3, 0, 0, 64]],
    faults: [{ mistake: "also", codes: ["countsBesideTime"] }],
    refusals: ["notSquare"],
  },
];
