/** JSON kept with the workbook, in its settings: it travels with the file and is saved when the workbook is. */
import { HostRefusal, run } from "./run";

/** Excel on the web keeps 2 MB of settings for a workbook. */
const MOST_CHARACTERS = 1_000_000;

export const store = {
  get: (key: string): Promise<unknown> => run((context) => getSetting(context, key)),

  set: (key: string, value: unknown): Promise<void> =>
    run(async (context) => {
      queueSetting(context, key, value);
      await context.sync();
    }),
};

/** @throws a sentence when what is stored is damaged: it is neither dropped nor overwritten unseen */
export async function getSetting(context: Excel.RequestContext, key: string): Promise<unknown> {
  const setting = context.workbook.settings.getItemOrNullObject(key).load("value");
  await context.sync();
  if (setting.isNullObject) return undefined;
  try {
    return JSON.parse(setting.value as string);
  } catch {
    throw new HostRefusal(`What this add-in keeps in the workbook ("${key}") is damaged and was left as it is.`);
  }
}

/** Text, since the host turns dates and nested values into forms of its own. */
export function queueSetting(context: Excel.RequestContext, key: string, value: unknown): void {
  const text = JSON.stringify(value);
  if (text.length > MOST_CHARACTERS) throw new HostRefusal(`What is to be kept with the workbook has ${text.length} characters; ${MOST_CHARACTERS} fit.`);
  context.workbook.settings.add(key, text);
}
