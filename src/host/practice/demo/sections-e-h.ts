import type { DemoSheet } from "./sheet";

const belt: DemoSheet = {
  name: "Baggage belt",
  cells: {
    A1: [["E. Which rate matters, and how sure? A baggage belt at Brenna airfield"], ["Rates per day; costs a day in each state."]],
    A4: [
      ["from \\ to", "Runs", "Slips", "Stands", "cost a day"],
      ["Runs", null, 0.05, 0.01, 0],
      ["Slips", 0.5, null, 0.1, 40],
      ["Stands", 1.2, null, null, 900],
    ],
    A9: [["One percent more of a rate changes availability by so many percent"], ['=CTMC.ELASTICITY(A4:D7,{"Runs","Slips"},,,TRUE)']],
    A15: [["… the mean time until it stands"], ['=CTMC.MEANTIMEELASTICITY(A4:D7,"Runs","Stands",TRUE)']],
    A21: [["… the cost a day"], ["=CTMC.COSTELASTICITY(A4:D7,E5:E7,,,TRUE)"]],
    A27: [["Repairs a day for 99 % availability", null, null, null, '=CTMC.RATEFORGOAL(A4:D7,"Stands","Runs",{"Runs","Slips"},0.99)']],
    A29: [["A year's counts, and the days spent in each state"]],
    A30: [
      ["from \\ to", "Runs", "Slips", "Stands", "days"],
      ["Runs", null, 15, 3, 310],
      ["Slips", 12, null, 3, 30],
      ["Stands", 6, null, null, 5],
    ],
    A35: [["Availability: low, middle, high", null, null, null, '=CTMC.AVAILABILITYBAND(A30:D33,E31:E33,{"Runs","Slips"})']],
  },
  bold: ["A1", "A4:E4", "A5:A7", "A9", "A10:D10", "A11:A13", "A15", "A16:D16", "A17:A19", "A21", "A22:D22", "A23:A25", "A29", "A30:E30", "A31:A33"],
  formats: { "B11:D13": "0.0000", "B17:D19": "0.0000", "B23:D25": "0.0000", E27: "0.0000", "E35:G35": "0.0000" },
  widths: { A: 118 },
};

const crews: DemoSheet = {
  name: "Pump crews",
  cells: {
    A1: [["F. Building a table. How many crews for the five pumps of the Lerke waterworks?"]],
    A3: [
      ["pumps", 5],
      ["failures a day, each", 0.025],
      ["repairs a day, a crew", 0.2],
      ["share of common causes", 0.05],
    ],
    A8: [
      ["crews", "four or more run"],
      [1, "=CTMC.AVAILABILITY(CTMC.REPAIRGROUP($B$3,$B$4,$B$5,A9,,,$B$6),{1,2})"],
      [2, "=CTMC.AVAILABILITY(CTMC.REPAIRGROUP($B$3,$B$4,$B$5,A10,,,$B$6),{1,2})"],
      [3, "=CTMC.AVAILABILITY(CTMC.REPAIRGROUP($B$3,$B$4,$B$5,A11,,,$B$6),{1,2})"],
    ],
    A13: [["The table behind two crews"], ["=CTMC.REPAIRGROUP(B3,B4,B5,2,,,B6,TRUE)"]],
    A22: [["A list, and the table it stands for"]],
    A23: [
      ["from", "to", "rate"],
      ["Idle", "Pumping", 2],
      ["Pumping", "Idle", 1.5],
      ["Pumping", "Blocked", 0.1],
      ["Blocked", "Idle", 0.8],
    ],
    E23: [["=CTMC.FROMLIST(A23:C27,TRUE)"]],
    A29: [["A table with its diagonal worked out; levels of a tank; a queue of two places"], ["=CTMC.GENERATOR(E23:H26,TRUE)"]],
    F30: [["=CTMC.BIRTHDEATH({0.4,0.2},{1,1.1},TRUE)"]],
    A35: [["=CTMC.QUEUE(3,2,1,2,TRUE)"]],
    A40: [["Together with a valve"], ['=CTMC.COMBINE(A23:C27,{"valve","Shut","Open";"Shut",0,0.5;"Open",1,0},TRUE)']],
    A49: [["Unblocking takes three steps of equal length"], ['=CTMC.STAGES(A23:C27,"Blocked",3,TRUE)']],
    A57: [["Idle and pumping as one"], ['=CTMC.LUMP(A23:C27,{"Fit","Fit","Blocked"},TRUE,TRUE)']],
  },
  bold: ["A1", "A8:B8", "A13", "A14:G14", "A15:A20", "A22", "A23:C23", "E23:H23", "E24:E26", "A29", "A30:D30", "A31:A33", "F30:I30", "F31:F33", "A35:D35", "A36:A38", "A40", "A41:G41", "A42:A47", "A49", "A50:F50", "A51:A55", "A57", "A58:C58", "A59:A60"],
  formats: { "B9:B11": "0.0000", "B15:G20": "0.0000", "B59:C60": "0.0000" },
  widths: { A: 172, B: 140, C: 126, D: 140, E: 140, F: 140, G: 132 },
};

const bridges: DemoSheet = {
  name: "Bridges",
  cells: {
    A1: [["G. From data. Condition of the Tornmyr county bridges, from one yearly inspection to the next"]],
    A3: [["Shares moving in a year"]],
    A4: [
      ["from \\ to", "Good", "Fair", "Poor"],
      ["Good", 0.9, 0.09, 0.01],
      ["Fair", 0.05, 0.85, 0.1],
      ["Poor", 0.2, 0.05, 0.75],
    ],
    A9: [["Rates per year"], ["=CTMC.FROMPROBABILITY(A4:D7,1,TRUE)"]],
    A15: [["How far a year of these rates is from the table", null, null, null, "=CTMC.EMBEDDINGGAP(A4:D7,1)"]],
    A17: [["From counts and bridge-years"]],
    A18: [
      ["from \\ to", "Good", "Fair", "Poor", "years"],
      ["Good", null, 18, 2, 200],
      ["Fair", 5, null, 9, 90],
      ["Poor", 4, 1, null, 20],
    ],
    A23: [["=CTMC.FROMCOUNTS(A18:D21,E19:E21,TRUE)"]],
    A28: [["A failure log of two pumps, up to day 120"]],
    A29: [
      ["unit", "day", "state"],
      ["P1", 0, "Up"],
      ["P1", 40, "Down"],
      ["P1", 43, "Up"],
      ["P2", 0, "Up"],
      ["P2", 75, "Down"],
      ["P2", 80, "Up"],
      ["P1", 110, "Down"],
      ["P1", 112, "Up"],
    ],
    E29: [["=CTMC.FROMLOG(A29:C37,120,TRUE)"]],
    A39: [["Failures a day, 3 in 230 days up: low, estimate, high", null, null, null, "=CTMC.RATEINTERVAL(3,230)"]],
  },
  bold: ["A1", "A3", "A4:D4", "A5:A7", "A9", "A10:D10", "A11:A13", "A17", "A18:E18", "A19:A21", "A23:D23", "A24:A26", "A28", "A29:C29", "E29:G29", "E30:E31"],
  formats: { "B11:D13": "0.0000", E15: "0.0E+00", "B24:D26": "0.0000", "F30:G31": "0.0000", "E39:G39": "0.0000" },
  widths: { A: 118 },
};

const quarters: DemoSheet = {
  name: "Two quarters",
  cells: {
    A1: [["H. Looking into a table. What has moved at the Ostrevik pier since last quarter?"]],
    A3: [["last quarter, per hour"]],
    A4: [
      ["from \\ to", "Waiting", "Loading", "Away"],
      ["Waiting", null, 1.2],
      ["Loading", 0.1, null, 0.9],
      ["Away", 0.25],
    ],
    F3: [["this quarter, per hour"]],
    F4: [
      ["from \\ to", "Waiting", "Loading", "Away"],
      ["Waiting", null, 1.2],
      ["Loading", 0.1, null, 0.7],
      ["Away", 0.25, 0.02],
    ],
    A9: [["What differs: from, to, before, after, ratio"], ["=CTMC.COMPARE(A4:D7,F4:I7)"]],
    A13: [["fingerprints", "=CTMC.FINGERPRINT(A4:D7)", "=CTMC.FINGERPRINT(F4:I7)"]],
    A15: [["What a careful colleague says"], ['=LET(found,CTMC.CHECK(F4:I7),INDEX(found,,1)&"  "&INDEX(found,,3))']],
    A20: [["Classes"], ["=CTMC.CLASSES(F4:I7,TRUE)"]],
    F20: [["The next state, when one is left"], ["=CTMC.JUMPCHAIN(F4:I7,TRUE)"]],
    A26: [["Mean stay, hours"], ["=CTMC.HOLDING(F4:I7,TRUE)"]],
    F27: [["settled to 1 % after, hours", null, null, "=CTMC.SETTLING(F4:I7)"]],
    A31: [["A shift as it might go: hours on, state entered"], ['=CTMC.SAMPLEPATH(F4:I7,"Waiting",8,7)']],
  },
  bold: ["A1", "A3", "A4:D4", "A5:A7", "F3", "F4:I4", "F5:F7", "A9", "A15", "A20", "A21:A23", "F20", "F21:I21", "F22:F24", "A26", "A27:A29", "A31"],
  formats: { "E10:E12": "0.000", "G22:I24": "0.0000", "B27:B29": "0.000", I27: "0.00", "A32:A60": "0.000" },
  widths: { A: 118 },
};

export const sectionsEToH: readonly DemoSheet[] = [belt, crews, bridges, quarters];
