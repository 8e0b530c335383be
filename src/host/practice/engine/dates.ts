/**
 * Date serial numbers of the 1900 system (ECMA-376 part 1, 18.17.4.1): 1 is 1900-01-01, and 60 is the day
 * 1900-02-29 that never was, kept so that numbers agree with every workbook ever saved.
 */
export interface Civil {
  readonly year: number;
  readonly month: number; // 1..12
  readonly day: number;
}

const DAY_MS = 86_400_000;
const EPOCH = Date.UTC(1899, 11, 31);
export const LAST_SERIAL = 2_958_465; // 9999-12-31

/** The serial number of a day; months and days beyond their range run over into the next, as DATE has it. null off the calendar. */
export function serialOf(year: number, month: number, day: number): number | null {
  const base = new Date(0);
  base.setUTCFullYear(year, month - 1, 1);
  const days = Math.round((base.getTime() - EPOCH) / DAY_MS) + (day - 1);
  const serial = days >= 60 ? days + 1 : days;
  return Number.isFinite(serial) && serial >= 0 && serial <= LAST_SERIAL ? serial : null;
}

export function civilOf(serial: number): Civil {
  const whole = Math.floor(serial);
  if (whole === 60) return { year: 1900, month: 2, day: 29 };
  if (whole === 0) return { year: 1900, month: 1, day: 0 };
  const date = new Date(EPOCH + (whole > 60 ? whole - 1 : whole) * DAY_MS);
  return { year: date.getUTCFullYear(), month: date.getUTCMonth() + 1, day: date.getUTCDate() };
}

/** 0 Sunday … 6 Saturday, by the calendar with the day that never was: serial 1 counts as a Sunday. */
export const weekdayOf = (serial: number): number => (((Math.floor(serial) - 1) % 7) + 7) % 7;

export interface Clock {
  readonly hour: number;
  readonly minute: number;
  readonly second: number;
}

/** Time of day, rounded to the given fraction of a second. */
export function clockOf(serial: number, decimals = 0): Clock {
  const scale = 10 ** decimals;
  const ticks = Math.round((serial - Math.floor(serial)) * 86_400 * scale);
  const seconds = ticks / scale;
  return { hour: Math.floor(seconds / 3600) % 24, minute: Math.floor(seconds / 60) % 60, second: seconds % 60 };
}

export const daysInMonth = (year: number, month: number): number => new Date(Date.UTC(year, month, 0)).getUTCDate();

/** The serial of the local date and time of a clock. */
export function serialOfMoment(moment: Date): number {
  const day = serialOf(moment.getFullYear(), moment.getMonth() + 1, moment.getDate()) ?? 0;
  return day + (moment.getHours() * 3600 + moment.getMinutes() * 60 + moment.getSeconds()) / 86_400;
}
