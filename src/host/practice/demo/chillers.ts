import type { DemoSheet } from "./sheet";

/** 1 May 2027 as a workbook counts days. */
export const SEASON_START = 46508;

const rates = "'Chiller rates'!A4:F9";
const up = '{"Running","Degraded"}';

/** Rates of one machine, invented, of the size that work orders of such plants give. */
export const chillerRates: DemoSheet = {
  name: "Chiller rates",
  cells: {
    A1: [["Varnholm Quay district cooling, chiller 2"], ["Rates per day, from the work orders of three seasons. Rows: from. Columns: to."]],
    A4: [
      ["from \\ to", "Running", "Degraded", "Waiting", "Repair", "Overhaul"],
      ["Running", null, 0.02, 0.004, null, 0.0027],
      ["Degraded", 0.1, null, 0.015],
      ["Waiting", null, null, null, 0.5],
      ["Repair", 0.25],
      ["Overhaul", 0.07],
    ],
    A11: [["Degraded: fouled condenser, runs at reduced output. Waiting: down, no crew yet."]],
    A13: [["Does the table hold together?"], ['=LET(found,CTMC.CHECK(A4:F9),INDEX(found,,1)&"  "&INDEX(found,,3))']],
  },
  bold: ["A1", "A4:F4", "A5:A9", "A13"],
  formats: { "B5:F9": "0.0000" },
  widths: { A: 118 },
};

export const plan: DemoSheet = {
  name: "Plan",
  cells: {
    A1: [["Chiller 2, cooling season 2027"]],
    A3: [
      ["Season starts", SEASON_START],
      ["Season, days", 153],
      ["At the start", "Running"],
    ],
    A7: [["Where will it be?"]],
    A8: [["date", "days on", "='Chiller rates'!B4:F4"]],
    H8: [["available", "no failure yet"]],
    A9: [
      ["=$B$3+B9", 1, `=CTMC.DISTRIBUTION(${rates},B5,B9:B13)`],
      ["=$B$3+B10", 7],
      ["=$B$3+B11", 30],
      ["=$B$3+B12", 90],
      ["=$B$3+B13", "=B4"],
    ],
    H9: [[`=CTMC.AVAILABILITY(${rates},${up},B5,B9:B13)`, `=CTMC.SURVIVAL(${rates},B5,"Waiting",B9:B13)`]],
    A15: [["In the long run"]],
    A16: [["share of time", null, `=CTMC.STATIONARY(${rates},,TRUE)`]],
    H16: [["available"], [`=CTMC.AVAILABILITY(${rates},${up})`]],
    A19: [["Mean time to the first failure, days"]],
    A20: [[`=CTMC.MEANABSORPTION(${rates},"Waiting",TRUE)`]],
    A26: [["Expected hours in each state"]],
    A27: [["up to day", null, "='Chiller rates'!B4:F4"]],
    A28: [[30, null, `=24*CTMC.OCCUPANCY(${rates},B5,A28:A29)`], ["=B4"]],
  },
  bold: ["A1", "A7", "A8:I8", "A15", "C16:G16", "H16", "A19", "A20:A24", "A26", "A27:G27"],
  formats: { B3: "yyyy-mm-dd", "A9:A13": "yyyy-mm-dd", "C9:I13": "0.0000", "C17:H17": "0.0000", "B20:B24": "0.0", "C28:G29": "0.0" },
  widths: { A: 118, B: 104, I: 112 },
};

/**
 * Five planted mistakes, each of another kind: the diagonal of Running does not match its exits (B4), a rate is text with
 * a decimal comma (D5), a rate is negative (E6), a column is headed "Repairs" and its row "Repair" (E3), and Overhaul
 * has no way out (row 8).
 */
export const fromColleague: DemoSheet = {
  name: "From a colleague",
  cells: {
    A1: [["Cooling tower fans, rates per day (from Oddvar, please look it over)"]],
    A3: [
      ["from \\ to", "Running", "Vibrating", "Stopped", "Repairs", "Overhaul"],
      ["Running", -0.03, 0.02, 0.004, null, 0.001],
      ["Vibrating", 0.1, null, "0,120"],
      ["Stopped", null, null, null, -0.33],
      ["Repair", 0.5],
      ["Overhaul"],
    ],
    A10: [["Available in the long run", null, '=CTMC.AVAILABILITY(A3:F8,{"Running","Vibrating"})']],
    A11: [["Days until it stops", null, '=INDEX(CTMC.MEANABSORPTION(A3:F8,"Stopped"),1)']],
    A13: [["What is wrong with it"], ['=LET(found,CTMC.CHECK(A3:F8),INDEX(found,,1)&"  "&INDEX(found,,3))']],
  },
  bold: ["A1", "A3:F3", "A4:A8", "A13"],
  formats: { C10: "0.0000", C11: "0.0" },
  widths: { A: 118 },
};
