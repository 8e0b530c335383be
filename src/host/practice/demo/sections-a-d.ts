import type { DemoSheet } from "./sheet";

/** One sheet for each section of the formula catalogue, a small planning question each. Places and figures are invented. */
const gates: DemoSheet = {
  name: "Gate drives",
  cells: {
    A1: [["A. Where will it be? Twelve gate drives of the Ostrevik ferry pier"], ["Rates per month, all drives new today. How many are worn by next spring?"]],
    A4: [
      ["from \\ to", "Good", "Fair", "Worn"],
      ["Good", null, 0.08],
      ["Fair", null, null, 0.05],
      ["Worn", 0.5],
    ],
    A9: [["Half a year on, from each state"], ["=CTMC.TRANSITION(A4:D7,6,TRUE)"]],
    A15: [["Shares, from new"]],
    A16: [["months on", "=B4:D4"]],
    E16: [["worn of 12"], ["=12*D17:D20"]],
    A17: [[3, '=CTMC.DISTRIBUTION(A4:D7,"Good",A17:A20)'], [6], [12], [24]],
    A22: [["In the long run"], ["=CTMC.STATIONARY(A4:D7,,TRUE)"]],
  },
  bold: ["A1", "A4:D4", "A5:A7", "A9", "A10:D10", "A11:A13", "A15", "A16:E16", "A22", "A23:C23"],
  formats: { "B11:D13": "0.0000", "B17:D20": "0.0000", "E17:E20": "0.00", "A24:C24": "0.0000" },
  widths: { A: 118 },
};

const pumps: DemoSheet = {
  name: "Standby pump",
  cells: {
    A1: [["B. How long until? Two stormwater pumps of the Lerke basin, one standing by"], ["Rates per day. When does the pit flood, and how is it until then?"]],
    A4: [
      ["from \\ to", "Both fit", "One fit", "None fit", "Flooded"],
      ["Both fit", null, 0.01, 0.0005],
      ["One fit", 0.2, null, 0.012],
      ["None fit", null, 0.4, null, 0.05],
      ["Flooded"],
    ],
    A10: [["Days until the pit floods: mean, standard deviation"]],
    A11: [['=CTMC.MEANABSORPTION(A4:E8,"Flooded",TRUE)', null, '=CTMC.ABSORPTIONSD(A4:E8,"Flooded")']],
    A16: [["What comes first: both fit again, or flooded?"], ['=CTMC.ABSORPTIONPROB(A4:E8,{"Both fit","Flooded"},TRUE)']],
    A23: [
      ["days on", "dry so far", "flooded by then", "chance a day"],
      [30, '=CTMC.SURVIVAL(A4:E8,"Both fit","Flooded",A24:A27)', '=CTMC.REACHED(A4:E8,"Both fit","Flooded",A24:A27)', '=CTMC.HAZARD(A4:E8,"Both fit","Flooded",A24:A27)'],
      [365],
      [1825],
      [3650],
    ],
    A29: [
      ["1 in 10 by day", '=CTMC.PERCENTILE(A4:E8,"Both fit","Flooded",0.1)'],
      ["half by day", '=CTMC.PERCENTILE(A4:E8,"Both fit","Flooded",0.5)'],
    ],
    A32: [["Days in each state before the flood"], ['=CTMC.TIMEBEFORE(A4:E8,"Both fit","Flooded",TRUE)']],
    A36: [["Shares while still dry, and the rate at which that ends"], ['=CTMC.QUASISTATIONARY(A4:E8,"Flooded",TRUE)']],
  },
  bold: ["A1", "A4:E4", "A5:A8", "A10", "A11:A14", "A16", "A17:C17", "A18:A21", "A23:D23", "A32", "A33:D33", "A36", "A37:E37"],
  formats: { "B11:C14": "0.0", "B18:C21": "0.0000", "B24:B27": "0.0000", "C24:C27": "0.0000", "D24:D27": "0.00E+00", "B29:B30": "0.0", "A34:D34": "0.0", "A38:D38": "0.0000", E38: "0.00E+00" },
  widths: { A: 118, C: 116, D: 108, E: 100 },
};

const sluice: DemoSheet = {
  name: "Cost horizon",
  cells: {
    A1: [["C. Over a period. Ten years of a sluice gate at Tornmyr, money discounted"], ["Rates per year, costs in thousands."]],
    A4: [
      ["from \\ to", "Sound", "Corroded", "Closed", "cost a year"],
      ["Sound", null, 0.15, 0.01, 2],
      ["Corroded", 0.4, null, 0.1, 9],
      ["Closed", 1.5, null, null, 60],
    ],
    G4: [
      ["each change costs", "Sound", "Corroded", "Closed"],
      ["Sound", null, null, 20],
      ["Corroded", 35, null, 25],
      ["Closed", 80],
    ],
    A9: [
      ["Ten years, discounted at 3 % a year", null, null, null, '=CTMC.COST(A4:D7,"Sound",10,E5:E7,G4:J7,0.03)'],
      ["The same without discount", null, null, null, '=CTMC.COST(A4:D7,"Sound",10,E5:E7,G4:J7)'],
      ["Until it first closes", null, null, null, '=CTMC.COSTUNTIL(A4:D7,"Sound",E5:E7,"Closed",G4:J7)'],
      ["A year in the long run", null, null, null, "=CTMC.COSTRATE(A4:D7,E5:E7,G4:J7)"],
      ["Closures in ten years", null, null, null, '=CTMC.FAILURES(A4:D7,{"Sound","Corroded"},"Sound",10)'],
    ],
    A15: [
      ["years", "=B4:D4"],
      [1, '=CTMC.OCCUPANCY(A4:D7,"Sound",A16:A18)'],
      [5],
      [10],
    ],
    A20: [["How often each change happens in ten years"], ['=CTMC.JUMPS(A4:D7,"Sound",10,TRUE)']],
    A26: [["Summer half, winter half"]],
    A27: [
      ["summer", "Sound", "Corroded", "Closed"],
      ["Sound", null, 0.05, 0.01],
      ["Corroded", 0.7, null, 0.05],
      ["Closed", 2.5],
    ],
    A32: [
      ["winter", "Sound", "Corroded", "Closed"],
      ["Sound", null, 0.25, 0.01],
      ["Corroded", 0.1, null, 0.15],
      ["Closed", 0.5],
    ],
    F27: [["years", 0.5], [null, 0.5]],
    A37: [["Shares at the end of each half"], ['=CTMC.PHASED(VSTACK(A27:D30,A32:D35),G27:G28,"Sound",TRUE)']],
    A42: [["Years spent in each state during each half"], ['=CTMC.PHASEDOCCUPANCY(VSTACK(A27:D30,A32:D35),G27:G28,"Sound",TRUE)']],
    A47: [["Inspected every half year: what is found corroded is made sound"], ["=CTMC.INSPECTION(A4:D7,{1,0,0;1,0,0;0,0,1},0.5,TRUE)"]],
  },
  bold: ["A1", "A4:E4", "A5:A7", "G4:J4", "G5:G7", "A15:D15", "A20", "A21:D21", "A22:A24", "A26", "A27:D27", "A28:A30", "A32:D32", "A33:A35", "A37", "A38:D38", "A42", "A43:C43", "A47", "A48:C48"],
  formats: { "E9:E13": "0.000", "B16:D18": "0.000", "B22:D24": "0.000", "B39:D40": "0.0000", "A44:C45": "0.0000", "A49:C49": "0.0000" },
  widths: { A: 118, G: 156 },
};

const desk: DemoSheet = {
  name: "Call desk",
  cells: {
    A1: [["D. Service levels. How many people for the Skarvik booking desk?"]],
    A3: [
      ["calls an hour", 34],
      ["answered an hour, each", 10],
      ["lines", 12],
    ],
    A7: [
      ["people", "a line is free", "someone is free", "calls lost an hour"],
      [3, "=CTMC.AVAILABILITY(CTMC.QUEUE($B$3,$B$4,A8,$B$5),SEQUENCE($B$5))", "=CTMC.AVAILABILITY(CTMC.QUEUE($B$3,$B$4,A8,$B$5),SEQUENCE(A8))", "=$B$3*(1-B8)"],
      [4, "=CTMC.AVAILABILITY(CTMC.QUEUE($B$3,$B$4,A9,$B$5),SEQUENCE($B$5))", "=CTMC.AVAILABILITY(CTMC.QUEUE($B$3,$B$4,A9,$B$5),SEQUENCE(A9))", "=$B$3*(1-B9)"],
      [5, "=CTMC.AVAILABILITY(CTMC.QUEUE($B$3,$B$4,A10,$B$5),SEQUENCE($B$5))", "=CTMC.AVAILABILITY(CTMC.QUEUE($B$3,$B$4,A10,$B$5),SEQUENCE(A10))", "=$B$3*(1-B10)"],
      [6, "=CTMC.AVAILABILITY(CTMC.QUEUE($B$3,$B$4,A11,$B$5),SEQUENCE($B$5))", "=CTMC.AVAILABILITY(CTMC.QUEUE($B$3,$B$4,A11,$B$5),SEQUENCE(A11))", "=$B$3*(1-B11)"],
    ],
    A13: [["The exchange behind the desk, rates per hour"]],
    A14: [
      ["from \\ to", "Up", "Slow", "Down"],
      ["Up", null, 0.01, 0.002],
      ["Slow", 0.25, null, 0.02],
      ["Down", 0.5],
    ],
    A19: [["Up or slow counts as service"], ['=CTMC.UPDOWN(A14:D17,{"Up","Slow"})']],
    A28: [["Share of an 8-hour shift with service, starting down", null, null, null, '=CTMC.INTERVALAVAILABILITY(A14:D17,{"Up","Slow"},"Down",8)']],
    A29: [["Service after 1, 2 and 4 hours, starting down", null, null, null, '=CTMC.AVAILABILITY(A14:D17,{"Up","Slow"},"Down",{1,2,4})']],
    A31: [["Changes an hour in the long run"], ["=CTMC.FLOWS(A14:D17,,TRUE)"]],
  },
  bold: ["A1", "A7:D7", "A13", "A14:D14", "A15:A17", "A19", "A31", "A32:D32", "A33:A35"],
  formats: { "B8:C11": "0.0000", "D8:D11": "0.00", "B20:B21": "0.000000", "B22": "0.00000", "B23:B26": "0.0", "E28:G29": "0.0000", "B33:D35": "0.00000" },
  widths: { A: 190, B: 100, C: 118, D: 128 },
};

export const sectionsAToD: readonly DemoSheet[] = [gates, pumps, sluice, desk];
