import { PlainStop } from './plainStop.mjs';

/**
 * @typedef {{ name: string, takes?: string, choices?: readonly string[], short?: string, about: string }} Flag
 *   `takes` names the value a flag needs ("N"); without it the flag is a plain switch.
 */

/**
 * Reads a command line against a list of flags. `--port 80` and `--port=80` mean the same.
 * @param {readonly string[]} words @param {readonly Flag[]} flags
 * @returns {Record<string, string | true>} by flag name, only those given
 * @throws {PlainStop} for a word that is not on the list, a missing value or a value that is not a choice
 */
export function readFlags(words, flags) {
  /** @type {Record<string, string | true>} */
  const given = {};
  for (let i = 0; i < words.length; i += 1) {
    const [word, inline] = splitWord(words[i]);
    const flag = flags.find(
      (f) => word === `--${f.name}` || (f.short !== undefined && word === `-${f.short}`)
    );
    if (!flag) throw new PlainStop(`There is no option ${words[i]}. Run with --help to see the options.`, 2);
    if (flag.takes === undefined) {
      if (inline !== undefined) throw new PlainStop(`${word} takes no value.`, 2);
      given[flag.name] = true;
      continue;
    }
    const value = inline ?? words[(i += 1)];
    if (value === undefined || value === '')
      throw new PlainStop(`${word} needs a value: ${word} ${flag.takes}.`, 2);
    if (flag.choices && !flag.choices.includes(value)) {
      throw new PlainStop(`${word} takes one of ${flag.choices.join(', ')}, not "${value}".`, 2);
    }
    given[flag.name] = value;
  }
  return given;
}

/** @param {string} word @returns {[string, string | undefined]} */
function splitWord(word) {
  const cut = word.startsWith('--') ? word.indexOf('=') : -1;
  return cut < 0 ? [word, undefined] : [word.slice(0, cut), word.slice(cut + 1)];
}

/**
 * A port number from text.
 * @param {string} text @param {string} from where it was given, for the sentence
 */
export function readPort(text, from) {
  const port = Number(text);
  if (!/^\d+$/.test(text) || port < 1 || port > 65535) {
    throw new PlainStop(`${from} must be a port number from 1 to 65535, not "${text}".`, 2);
  }
  return port;
}

/** The help text of a command. @param {string} usage @param {string} about @param {readonly Flag[]} flags */
export function helpText(usage, about, flags) {
  const rows = flags.map((f) => {
    const names = `${f.short === undefined ? '' : `-${f.short}, `}--${f.name}${f.takes === undefined ? '' : ` ${f.takes}`}`;
    return `  ${names.padEnd(20)} ${f.about}`;
  });
  return [`Usage: ${usage}`, '', about, '', 'Options:', ...rows].join('\n');
}
