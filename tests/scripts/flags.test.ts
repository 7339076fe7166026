import { describe, expect, it } from 'vitest';
import { helpText, readFlags, readPort } from '../../scripts/lib/flags.mjs';

const FLAGS = [
  { name: 'port', takes: 'N', about: 'the port' },
  { name: 'only', takes: 'STAGE', choices: ['unit', 'pages'], about: 'one stage' },
  { name: 'name', short: 't', takes: 'PATTERN', about: 'a name' },
  { name: 'dev', about: 'live' }
];

describe('the command line', () => {
  it('takes a value after a space or an equals sign', () => {
    expect(readFlags(['--port', '80'], FLAGS)).toEqual({ port: '80' });
    expect(readFlags(['--port=80', '--dev'], FLAGS)).toEqual({ port: '80', dev: true });
  });

  it('takes a short name where a flag has one', () => {
    expect(readFlags(['-t', 'quarantine'], FLAGS)).toEqual({ name: 'quarantine' });
  });

  it('keeps an equals sign inside a value', () => {
    expect(readFlags(['--name=a=b'], FLAGS)).toEqual({ name: 'a=b' });
  });

  it.each([
    [['--prot', '80'], 'There is no option --prot'],
    [['80'], 'There is no option 80'],
    [['--port'], '--port needs a value'],
    [['--port='], '--port needs a value'],
    [['--dev=yes'], '--dev takes no value'],
    [['--only', 'all'], '--only takes one of unit, pages, not "all"']
  ])('refuses %j with a sentence', (words, sentence) => {
    expect(() => readFlags(words, FLAGS)).toThrow(sentence);
  });

  it.each(['0', '65536', '-1', '80a', '8e1', ''])('refuses %j as a port', (text) => {
    expect(() => readPort(text, 'PORT')).toThrow('PORT must be a port number from 1 to 65535');
  });

  it('reads the lowest and the highest port', () => {
    expect([readPort('1', 'PORT'), readPort('65535', 'PORT')]).toEqual([1, 65535]);
  });

  it('lists every option in the help', () => {
    const help = helpText('npm start', 'Starts.', FLAGS);
    for (const flag of FLAGS) expect(help).toContain(`--${flag.name}`);
    expect(help).toContain('-t, --name PATTERN');
  });
});
