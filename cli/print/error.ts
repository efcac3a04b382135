import pc from "picocolors";
import { Problem } from "../../src/errors.js";

/** The JSON form of an error (design: schema dragledger/error/1). */
export function errorDocument(thrown: unknown): {
  schema: string;
  code: string;
  message: string;
  where: string | null;
  remedy: string;
} {
  const schema = "dragledger/error/1";
  if (thrown instanceof Problem)
    return { schema, code: thrown.code, message: thrown.message, where: thrown.where, remedy: thrown.remedy };
  return { schema, code: "defect", message: messageOf(thrown), where: null, remedy: defectRemedy };
}

const defectRemedy = "This is a defect of dragledger: run again with --debug and report what it prints.";

const messageOf = (thrown: unknown): string => (thrown instanceof Error ? thrown.message : String(thrown));

/** One to three lines: what and where, then what to do. A stack only on request, and only for a defect. */
export function errorText(thrown: unknown, how: { debug: boolean; colour: boolean }): string {
  const colours = pc.createColors(how.colour);
  const document = errorDocument(thrown);
  const lines = [`${colours.red("error:")} ${document.message}`];
  if (document.where) lines.push(`  at ${document.where}`);
  lines.push(`  ${document.remedy}`);
  if (how.debug && thrown instanceof Error && thrown.stack) lines.push(thrown.stack);
  if (how.debug && thrown instanceof Error && thrown.cause instanceof Error && thrown.cause.stack)
    lines.push(`caused by ${thrown.cause.stack}`);
  return `${lines.join("\n")}\n`;
}
