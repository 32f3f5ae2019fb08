import { z } from 'zod';

/** A number that a method, measure or null asks for. The form shows it; the schema follows from it. */
export interface NumberSetting {
  kind: 'number';
  key: string;
  name: string;
  unit: string | null;
  least: number;
  most: number;
  whole?: true;
  initial: number;
  /** What it means, for hover and focus. */
  sentence: string;
}

/** A choice among a few words. */
export interface ChoiceSetting {
  kind: 'choice';
  key: string;
  name: string;
  options: readonly { value: string; name: string }[];
  initial: string;
  sentence: string;
}

export type SettingField = NumberSetting | ChoiceSetting;

/** Values of an entry's settings, by their key. */
export const settingsSchema = z.record(
  z.string().max(40),
  z.union([z.number(), z.string().max(40)]),
);
export type Settings = z.infer<typeof settingsSchema>;

/** The schema of the settings that an entry states. */
export function schemaOf(fields: readonly SettingField[]): z.ZodType<Settings> {
  return z.strictObject(
    Object.fromEntries(fields.map((field) => [field.key, schemaOfField(field)])),
  );
}

function schemaOfField(field: SettingField): z.ZodType<number | string> {
  if (field.kind === 'choice') return z.enum(field.options.map(({ value }) => value));
  const number = field.whole ? z.int() : z.number();
  return number
    .min(field.least, `must be at least ${field.least}`)
    .max(field.most, `must be at most ${field.most}`);
}

/** The settings an entry starts with. */
export function initialSettings(fields: readonly SettingField[]): Settings {
  return Object.fromEntries(fields.map(({ key, initial }) => [key, initial]));
}
