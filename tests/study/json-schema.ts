/** What JSON Schema 2020-12 (core and validation vocabularies) says about the value of each keyword that the study schema uses. */
const isText = (value: unknown): boolean => typeof value === "string";
const isCount = (value: unknown): boolean => Number.isInteger(value) && (value as number) >= 0;
const isBlock = (value: unknown): value is Record<string, unknown> =>
  typeof value === "object" && value !== null && !Array.isArray(value);
const isTextList = (value: unknown): boolean => Array.isArray(value) && value.every(isText) && new Set(value).size === value.length;
const types = ["null", "boolean", "object", "array", "number", "string", "integer"];

const keywords: Record<string, (value: unknown) => boolean> = {
  $schema: isText,
  title: isText,
  description: isText,
  default: () => true,
  examples: Array.isArray,
  type: (value) =>
    Array.isArray(value) ? isTextList(value) && value.every((each) => types.includes(each)) : types.includes(String(value)),
  enum: (value) => Array.isArray(value) && value.length > 0,
  const: () => true,
  pattern: (value) => isText(value) && new RegExp(value as string) instanceof RegExp,
  minLength: isCount,
  maxLength: isCount,
  minItems: isCount,
  maxItems: isCount,
  minProperties: isCount,
  required: isTextList,
  properties: isBlock,
  additionalProperties: (value) => typeof value === "boolean" || isBlock(value),
  propertyNames: isBlock,
  items: isBlock,
  anyOf: (value) => Array.isArray(value) && value.length > 0 && value.every(isBlock),
};

type Schema = Record<string, unknown>;

/** All schemas within a schema, each with its path, itself first. */
export function allSchemas(schema: Schema, path = "#"): { path: string; schema: Schema }[] {
  const below: [string, unknown][] = [
    ...Object.entries((schema.properties as Schema) ?? {}).map(([key, each]): [string, unknown] => [`properties/${key}`, each]),
    ...((schema.anyOf as Schema[]) ?? []).map((each, k): [string, unknown] => [`anyOf/${k}`, each]),
    ["items", schema.items],
    ["additionalProperties", schema.additionalProperties],
    ["propertyNames", schema.propertyNames],
  ];
  return [{ path, schema }, ...below.flatMap(([step, each]) => (isBlock(each) ? allSchemas(each, `${path}/${step}`) : []))];
}

/** What breaks the rules for schemas; a keyword that this check does not know counts as broken. */
export function schemaBreaches(schema: Schema): string[] {
  return allSchemas(schema).flatMap(({ path, schema: each }) =>
    Object.entries(each).flatMap(([keyword, value]) => (keywords[keyword]?.(value) ? [] : [`${path}: ${keyword}`])),
  );
}

const typeOf = (value: unknown): string => (value === null ? "null" : Array.isArray(value) ? "array" : typeof value);

/** Paths of values that the schema refuses. Only for schemas without breaches. */
export function instanceFaults(schema: Schema, value: unknown, path = ""): string[] {
  const wrong: boolean[] = [];
  const below: string[] = [];
  const type = schema.type as string | string[] | undefined;
  if (type !== undefined) wrong.push(![type].flat().includes(typeOf(value)));
  if ("const" in schema) wrong.push(value !== schema.const);
  if (schema.enum) wrong.push(!(schema.enum as unknown[]).includes(value));
  if (schema.anyOf) wrong.push(!(schema.anyOf as Schema[]).some((each) => instanceFaults(each, value).length === 0));
  if (typeof value === "string") {
    if (schema.pattern) wrong.push(!new RegExp(schema.pattern as string).test(value));
    wrong.push(value.length < ((schema.minLength as number) ?? 0) || value.length > ((schema.maxLength as number) ?? Infinity));
  }
  if (Array.isArray(value)) {
    wrong.push(value.length < ((schema.minItems as number) ?? 0) || value.length > ((schema.maxItems as number) ?? Infinity));
    if (schema.items) below.push(...value.flatMap((each, k) => instanceFaults(schema.items as Schema, each, `${path}[${k}]`)));
  }
  if (isBlock(value)) {
    const properties = (schema.properties as Record<string, Schema>) ?? {};
    wrong.push(Object.keys(value).length < ((schema.minProperties as number) ?? 0));
    wrong.push(((schema.required as string[]) ?? []).some((key) => !Object.hasOwn(value, key)));
    for (const [key, each] of Object.entries(value)) {
      const rest = schema.additionalProperties;
      if (Object.hasOwn(properties, key)) below.push(...instanceFaults(properties[key]!, each, `${path}.${key}`));
      else if (rest === false) below.push(`${path}.${key}`);
      else if (isBlock(rest)) below.push(...instanceFaults(rest, each, `${path}.${key}`));
      if (schema.propertyNames && instanceFaults(schema.propertyNames as Schema, key).length > 0) below.push(`${path}.${key}`);
    }
  }
  return [...(wrong.includes(true) ? [path] : []), ...below];
}
