/* Marks to how each place of the sheet stands, by the same rules as the command; two lists of marks to one. */
"use strict";
(function (review) {
  const { kindOf } = review.text;

  /** Names are the same whatever their capitals, white space, full stops and what cannot be seen. */
  function plainName(name) {
    return name.normalize("NFKC").replace(/[\s.\p{Cf}]+/gu, "").toUpperCase().toLowerCase().replaceAll("ς", "σ");
  }

  /** Whether somebody prepared a revision, and so cannot check it: by signature, or by the spec for the sheet's own. */
  function isAuthor(name, revision, sheet, signatures) {
    const names = signatures.filter((one) => one.role === "prepared" && one.revision === revision).map((one) => one.by);
    if (sheet.author && revision === sheet.revision) names.push(sheet.author);
    return names.map(plainName).includes(plainName(name));
  }

  /** What makes two entries the same: all they say, but for an answer that came later. */
  function keyOf(entry) {
    return JSON.stringify(Object.keys(entry).filter((key) => key !== "answer").sort().map((key) => [key, entry[key]]));
  }

  /**
   * ``first`` with those entries of ``second`` that it has not, and their answers where it has none. The marks of a
   * place stay in the order of their dates: an older one goes before a later one.
   */
  function merged(first, second) {
    const all = first.map((one) => ({ ...one }));
    const known = new Map(all.toReversed().map((one) => [keyOf(one), one]));
    for (const one of second) {
      const same = known.get(keyOf(one));
      if (same !== undefined) {
        same.answer ??= one.answer;
        continue;
      }
      const made = { ...one };
      const later = all.findIndex((other) => placeOf(other) === placeOf(one) && other.date > one.date);
      all.splice(later < 0 ? all.length : later, 0, made);
      known.set(keyOf(one), made);
    }
    return all;
  }

  /** The first mark of ``second`` that stands before it with another answer; undefined where there is none. */
  function twiceAnswered(first, second) {
    const answers = new Map(first.toReversed().map((one) => [keyOf(one), one.answer]));
    return second.find((one) => {
      const other = answers.get(keyOf(one)) ?? one.answer;
      answers.set(keyOf(one), other);
      return one.answer && keyOf(other) !== keyOf(one.answer);
    });
  }

  /** Kind and name of what a mark is on; a signature has its role. */
  function placeOf(entry) {
    return entry.role ?? `${kindOf(entry)} ${entry[kindOf(entry)]}`;
  }

  /** Those of ``second`` that say something ``first`` does not say. */
  function beyond(first, second) {
    const known = new Map(first.map((one) => [keyOf(one), one]));
    return second.filter((one) => {
      const same = known.get(keyOf(one));
      return same === undefined || (one.answer && !same.answer);
    });
  }

  const NUMBER = /^([-+−]?)(\d+)(?:\.(\d+))?(?:e(-?\d+))?(?: (.*))?$/;
  const LARGEST_POWER = 400;

  /** A printed number as digits times a power of ten, and its unit; null for a text that is none. */
  function printed(text) {
    const found = NUMBER.exec(text.split(" (")[0]);
    if (found === null || Math.abs(Number(found[4] ?? 0)) > LARGEST_POWER) return null;
    const [, sign, whole, part = "", power = "0", unit] = found;
    return { digits: BigInt(whole + part) * (sign === "-" || sign === "−" ? -1n : 1n),
             power: Number(power) - part.length, unit };
  }

  /** Whether a number now still rounds to the one that was seen, decided on the printed texts alone. */
  function showsTheSame(seen, now) {
    if (seen === undefined || now === undefined) return seen === now;
    const was = printed(seen), is = printed(now);
    if (was === null || is === null || was.unit !== is.unit) return seen === now;
    const least = Math.min(was.power, is.power) - 1;
    const scaled = (digits, power) => digits * 10n ** BigInt(power - least);
    const off = scaled(is.digits, is.power) - scaled(was.digits, was.power);
    return (off < 0n ? -off : off) <= scaled(5n, Math.max(was.power, is.power) - 1);
  }

  /** Whether what a mark saw is still what the place shows. */
  function holds(mark, place) {
    return mark.seen === place.seen && showsTheSame(mark.shown, place.shown);
  }

  function stateOf(mark, place) {
    if (mark === undefined) return "unmarked";
    if (mark.verdict === "comment") return "comment";
    return holds(mark, place) ? mark.verdict : "lapsed";
  }

  /** The marks of each place, newest first. */
  function byPlace(marks) {
    const found = new Map();
    for (const mark of marks) found.set(placeOf(mark), [mark, ...(found.get(placeOf(mark)) ?? [])]);
    return found;
  }

  /** How each place stands: its state, the mark that stands, and the earlier ones, newest first. */
  function standing(places, marks) {
    const found = byPlace(marks);
    return places.map((place) => {
      const [last, ...earlier] = found.get(`${place.kind} ${place.name}`) ?? [];
      return { place, state: stateOf(last, place), mark: last, earlier };
    });
  }

  /** The open comments on what the sheet has no more. */
  function goneComments(places, marks) {
    const there = new Set(places.map((place) => `${place.kind} ${place.name}`));
    return [...byPlace(marks)].filter(([key, [last]]) => !there.has(key) && last.verdict === "comment").length;
  }

  /** How many places are in each state. */
  function counts(items) {
    const found = { agreed: 0, corrected: 0, comment: 0, lapsed: 0, unmarked: 0 };
    for (const item of items) found[item.state] += 1;
    return found;
  }

  review.marks = { plainName, isAuthor, keyOf, merged, beyond, twiceAnswered, showsTheSame, standing, goneComments,
                   counts };
})(window.calcpackReview);
