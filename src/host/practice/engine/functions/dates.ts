/** Dates and times. Ours rather than the library's, whose dates depend on the machine's time zone. */
import { civilOf, clockOf, daysInMonth, serialOf, serialOfMoment, weekdayOf } from "../dates";
import { numberInText } from "../entry";
import type { Evaluation } from "../evaluate";
import { Fault, type Value } from "../value";
import { define, defineLifted, numberFrom, numbersIn, type Definition } from "./define";

const offCalendar = (): Fault => new Fault("#NUM!", "That is no day from 1900-01-01 to 9999-12-31.");

function part(name: string, description: string, apply: (serial: number) => number): Definition {
  return defineLifted(name, "date", "n", description, ([serial]: readonly number[]) => (serial! < 0 || serial! >= 2_958_466 ? offCalendar() : apply(serial!)));
}

function monthsLater(serial: number, months: number, toEnd: boolean): number | Fault {
  if (serial < 0) return offCalendar();
  const { year, month, day } = civilOf(serial);
  const total = year * 12 + (month - 1) + Math.trunc(months);
  const target = { year: Math.floor(total / 12), month: (total % 12) + 1 };
  const last = daysInMonth(target.year, target.month);
  return serialOf(target.year, target.month, toEnd ? last : Math.min(day, last)) ?? offCalendar();
}

/** Monday-to-Friday days from the first to the second date, both counted, without holidays. */
function workingDays(from: number, to: number, holidays: ReadonlySet<number>): number {
  const [first, last, sign] = from <= to ? [from, to, 1] : [to, from, -1];
  let count = 0;
  for (let day = first; day <= last; day++) if (isWorkingDay(day, holidays)) count++;
  return sign * count;
}

const isWorkingDay = (day: number, holidays: ReadonlySet<number>): boolean => weekdayOf(day) !== 0 && weekdayOf(day) !== 6 && !holidays.has(day);
const SPAN_LIMIT = 1_000_000;

function holidaysIn(value: Value | undefined, evaluation: Evaluation): Set<number> | Fault {
  if (value === undefined || value === null) return new Set();
  const numbers = numbersIn([value], evaluation);
  return numbers instanceof Fault ? numbers : new Set(numbers.map(Math.trunc));
}

function withHolidays(name: string, signature: string, description: string, apply: (first: number, second: number, holidays: ReadonlySet<number>) => Value): Definition {
  return define(name, signature, description, (values, evaluation) => {
    const first = numberFrom(values[0], evaluation, 0);
    const second = numberFrom(values[1], evaluation, 0);
    const holidays = holidaysIn(values[2], evaluation);
    if (first instanceof Fault) return first;
    if (second instanceof Fault) return second;
    return holidays instanceof Fault ? holidays : apply(Math.trunc(first), Math.trunc(second), holidays);
  });
}

export const dates: readonly Definition[] = [
  define("TODAY", "", "The date of today.", (_, evaluation) => Math.floor(serialOfMoment(evaluation.sight.now()))),
  define("NOW", "", "The date and time of now.", (_, evaluation) => serialOfMoment(evaluation.sight.now())),
  defineLifted("DATE", "year, month, day", "n", "The date of year, month and day.", ([year = 0, month = 0, day = 0]: readonly number[]) => {
    const full = Math.trunc(year) < 1900 ? Math.trunc(year) + 1900 : Math.trunc(year);
    return serialOf(full, Math.trunc(month), Math.trunc(day)) ?? offCalendar();
  }),
  defineLifted("TIME", "hour, minute, second", "n", "The time of day as a part of a day.", ([hour = 0, minute = 0, second = 0]: readonly number[]) => {
    const seconds = Math.trunc(hour) * 3600 + Math.trunc(minute) * 60 + Math.trunc(second);
    return seconds < 0 ? new Fault("#NUM!", "A time cannot be negative.") : (seconds / 86_400) % 1;
  }),
  part("YEAR", "The year of a date.", (serial) => civilOf(serial).year),
  part("MONTH", "The month of a date.", (serial) => civilOf(serial).month),
  part("DAY", "The day of the month of a date.", (serial) => civilOf(serial).day),
  part("HOUR", "The hour of a time.", (serial) => clockOf(serial).hour),
  part("MINUTE", "The minute of a time.", (serial) => clockOf(serial).minute),
  part("SECOND", "The second of a time.", (serial) => clockOf(serial).second),
  defineLifted("WEEKDAY", "date, [count from]", "n", "The day of the week: 1 Sunday; counted from 2: 1 Monday; from 3: 0 Monday.", ([serial = 0, kind = 1]: readonly number[]) => {
    const day = weekdayOf(serial);
    if (kind === 1) return day + 1;
    if (kind === 2) return ((day + 6) % 7) + 1;
    if (kind === 3) return (day + 6) % 7;
    return kind >= 11 && kind <= 17 ? ((day - (kind - 10) + 7) % 7) + 1 : new Fault("#NUM!", `Weeks cannot be counted from ${kind}.`);
  }),
  part("ISOWEEKNUM", "The number of the week in its year (ISO 8601).", (serial) => {
    const thursday = Math.floor(serial) + 3 - ((weekdayOf(serial) + 6) % 7);
    return Math.floor((thursday - serialOf(civilOf(thursday).year, 1, 1)!) / 7) + 1;
  }),
  defineLifted("EDATE", "date, months", "n", "The same day some months later.", ([serial = 0, months = 0]: readonly number[]) => monthsLater(serial, months, false)),
  defineLifted("EOMONTH", "date, months", "n", "The last day of the month some months later.", ([serial = 0, months = 0]: readonly number[]) => monthsLater(serial, months, true)),
  defineLifted("DAYS", "end, start", "n", "Days between two dates.", ([end = 0, start = 0]: readonly number[]) => Math.floor(end) - Math.floor(start)),
  defineLifted("DATEVALUE", "text", "t", "The date that a text names.", ([text]: readonly string[], evaluation) => {
    const value = /\D\d+\D/.test(text!) ? numberInText(text!, evaluation.sight.locale) : null;
    return value === null ? new Fault("#VALUE!", `"${text!}" is no date.`) : Math.floor(value);
  }),
  defineLifted("TIMEVALUE", "text", "t", "The time that a text names.", ([text]: readonly string[], evaluation) => {
    const value = text!.includes(":") ? numberInText(text!, evaluation.sight.locale) : null;
    return value === null ? new Fault("#VALUE!", `"${text!}" is no time.`) : value % 1;
  }),
  withHolidays("NETWORKDAYS", "start, end, [holidays]", "Working days from one date to another, both counted.", (from, to, holidays) =>
    Math.abs(to - from) > SPAN_LIMIT ? offCalendar() : workingDays(from, to, holidays),
  ),
  withHolidays("WORKDAY", "start, days, [holidays]", "The date some working days later.", (from, days, holidays) => {
    if (Math.abs(days) > SPAN_LIMIT) return offCalendar();
    let day = from;
    for (let left = Math.abs(days); left > 0; ) {
      day += Math.sign(days);
      if (day < 0) return offCalendar();
      if (isWorkingDay(day, holidays)) left--;
    }
    return day;
  }),
];
