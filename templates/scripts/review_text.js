/* The text of a review file to marks and signatures, and back; the same bytes as the command writes. */
"use strict";
(function (review) {
  const TARGETS = ["step", "input", "assumption", "limit", "figure"];
  const MARK = ["revision", "seen", "shown", "verdict", "by", "date", "text"];
  const NEEDED = ["revision", "seen", "verdict", "by", "date"];
  const ANSWER = ["by", "date", "text"];
  const SIGNATURE = ["role", "by", "date", "revision", "record"];
  const VERDICTS = ["agreed", "comment", "corrected"];
  const ROLES = ["prepared", "checked", "approved"];
  const LONGEST = 200, LONGEST_TEXT = 8000;
  const PLAIN = /^[A-Za-z][A-Za-z0-9_.()/+°%-]*( [A-Za-z0-9_.()/+°%-]+)*$/;
  /** Characters that nobody can see; a review file has none. */
  const UNSEEN = new RegExp("[\\u0000-\\u0008\\u000b\\u000c\\u000e-\\u001f\\u007f-\\u009f\\u200e\\u200f\\u2028-\\u202e"
    + "\\u2066-\\u2069\\ud800-\\udfff\\ufeff\\ufffe\\uffff]", "gu");
  const WORDS = /^(true|false|null|yes|no|on|off)$/i;

  /** The kind of what a mark is on: the one key of it that names a place of the sheet. */
  function kindOf(mark) {
    return TARGETS.find((kind) => kind in mark);
  }

  function scalar(text) {
    return PLAIN.test(text) && !WORDS.test(text) ? text : JSON.stringify(text);
  }

  function lines(entry, keys, indent) {
    return keys.filter((key) => key in entry).map((key) => `${indent}${key}: ${scalar(entry[key])}`);
  }

  function block(entry, keys) {
    return lines(entry, keys, "    ").map((line, index) => (index ? line : line.replace("    ", "  - ")));
  }

  function markLines(mark) {
    const answer = mark.answer ? ["    answer:", ...lines(mark.answer, ANSWER, "      ")] : [];
    return [...block(mark, [kindOf(mark), ...MARK]), ...answer];
  }

  /** The whole text of the review file of sheet ``number``. */
  function write(number, marks, signatures) {
    const head = `# Marks of the check of sheet ${number}. `
      + "Written by 'calcpack review' and by the sheet's page; keep it in git.";
    const text = [head, "review: 1", `sheet: ${scalar(number)}`];
    if (marks.length) text.push("marks:", ...marks.flatMap(markLines));
    if (signatures.length) text.push("signatures:", ...signatures.flatMap((one) => block(one, SIGNATURE)));
    return text.join("\n") + "\n";
  }

  function refuse(words) {
    throw new Error(words);
  }

  function isMapping(node) {
    return node !== null && typeof node === "object" && !Array.isArray(node);
  }

  /** A mapping with no key but ``keys``, all of ``needed``, and texts for values; ``where`` says which in a fault. */
  function texts(node, keys, needed, where) {
    if (!isMapping(node)) refuse(`${where} is no mapping`);
    const unknown = Object.keys(node).find((key) => !keys.includes(key));
    if (unknown !== undefined) refuse(`${where} has the unknown key '${unknown}'`);
    const missing = needed.find((key) => !node[key]);
    if (missing !== undefined) refuse(`${where} has no ${missing}`);
    return Object.fromEntries(keys.filter((key) => key in node).map((key) => [key, entry(node[key], key, where)]));
  }

  function entry(value, key, where) {
    if (key === "answer") return texts(value, ANSWER, ANSWER, `the answer to ${where}`);
    if (typeof value !== "string" || !value.trim()) refuse(`${where} has no text at ${key}`);
    const found = value.trim();
    if (found.search(UNSEEN) >= 0) refuse(`${where} has a character at ${key} that cannot be seen`);
    if (found.length > (key === "text" ? LONGEST_TEXT : LONGEST)) refuse(`${where} has too long a text at ${key}`);
    if (key === "date" && !isDate(found)) refuse(`${where} has the date '${found}', which is no day like 2026-03-31`);
    return found;
  }

  function isDate(text) {
    const day = new Date(`${text}T00:00:00Z`);
    return /^\d{4}-\d{2}-\d{2}$/.test(text) && !Number.isNaN(day.valueOf()) && day.toISOString().startsWith(text);
  }

  function mark(node, index) {
    const where = `mark ${index + 1}`;
    const found = texts(node, [...TARGETS, ...MARK, "answer"], NEEDED, where);
    if (TARGETS.filter((kind) => kind in found).length !== 1) refuse(`${where} must name one of ${TARGETS.join(", ")}`);
    if (!VERDICTS.includes(found.verdict)) refuse(`${where} has the verdict '${found.verdict}'`);
    if (found.verdict !== "agreed" && !found.text) refuse(`${where} has no text`);
    return found;
  }

  function signature(node, index) {
    const found = texts(node, SIGNATURE, SIGNATURE, `signature ${index + 1}`);
    if (!ROLES.includes(found.role)) refuse(`signature ${index + 1} has the role '${found.role}'`);
    return found;
  }

  function list(node, name) {
    if (node === undefined || node === "") return [];
    return Array.isArray(node) ? node : refuse(`${name} is no list`);
  }

  function loaded(text) {
    const yaml = window.jsyaml;
    try {
      return yaml.load(text, { schema: yaml.FAILSAFE_SCHEMA });
    } catch (error) {
      const line = error.mark ? `, line ${error.mark.line + 1}` : "";
      return refuse(`it is not YAML: ${error.reason || error.message}${line}`);
    }
  }

  /** The marks and signatures in a file's text; an Error says in plain words why there are none. */
  function read(text, number) {
    const data = loaded(text);
    if (!isMapping(data) || data.review !== "1") refuse("it has no line 'review: 1'");
    const unknown = Object.keys(data).find((key) => !["review", "sheet", "marks", "signatures"].includes(key));
    if (unknown !== undefined) refuse(`it has the unknown key '${unknown}'`);
    if (data.sheet !== number) refuse(`it is of sheet ${data.sheet || "without a number"}, this is ${number}`);
    return { marks: list(data.marks, "marks").map(mark),
             signatures: list(data.signatures, "signatures").map(signature) };
  }

  review.text = { read, write, kindOf, UNSEEN, LONGEST_TEXT };
})(window.calcpackReview ??= {});
