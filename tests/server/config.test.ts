import { describe, expect, it } from 'vitest';
import { readConfig, writeEnvironment } from '../../server/config.ts';

const enough = {
  FEEDERWRIGHT_DATABASE_PORT: '7403',
  FEEDERWRIGHT_DATABASE_PASSWORD: 'database-password',
  FEEDERWRIGHT_REDIS_PORT: '7404',
  FEEDERWRIGHT_REDIS_PASSWORD: 'redis-password',
  FEEDERWRIGHT_SMTP_PORT: '7405',
  FEEDERWRIGHT_SESSION_SECRET: 'a-secret-of-more-than-thirty-two-characters',
  FEEDERWRIGHT_FILES_DIR: '/tmp/files',
  FEEDERWRIGHT_MAILBOX_DIR: '/tmp/mailbox',
};

describe('readConfig', () => {
  it('fills in what has a usual value, and only that', () => {
    const config = readConfig(enough);
    expect(config).toMatchObject({ host: '127.0.0.1', port: 7400, demo: false, production: true });
    expect(config).toMatchObject({ runLeaseSeconds: 60, sweepSeconds: 10, queuedGraceSeconds: 30 });
    expect(config.publicUrl).toBe('http://127.0.0.1:7400');
    expect(config.database).toMatchObject({ host: '127.0.0.1', port: 7403, name: 'feederwright' });
  });

  it('names every missing variable at once, when the environment is empty', () => {
    const read = () => readConfig({});
    for (const name of Object.keys(enough)) expect(read).toThrow(`${name}: got nothing, expected `);
  });

  it.each([
    ['FEEDERWRIGHT_PORT', '70000', 'got "70000", expected a whole number from 0 to 65535'],
    ['FEEDERWRIGHT_PORT', '80.5', 'got "80.5", expected a whole number'],
    ['FEEDERWRIGHT_DATABASE_PORT', '', 'got an empty value, expected a whole number from 1 to 65535'],
    ['FEEDERWRIGHT_DEMO', 'yes', 'got "yes", expected one of true, false'],
    ['FEEDERWRIGHT_LOG_LEVEL', 'loud', 'got "loud", expected one of silent, fatal'],
    ['FEEDERWRIGHT_PUBLIC_URL', 'desk.example', 'got "desk.example", expected an http or https address'],
    ['FEEDERWRIGHT_PUBLIC_URL', 'ftp://desk.example', 'expected an http or https address'],
  ])('says what it got and what it expected, when %s is "%s"', (name, value, message) => {
    const read = () => readConfig({ ...enough, [name]: value });
    expect(read).toThrow(`${name}: `);
    expect(read).toThrow(message);
  });

  it('never repeats a secret, when it is too short', () => {
    const read = () => readConfig({ ...enough, FEEDERWRIGHT_SESSION_SECRET: 'too-short-secret' });
    expect(read).toThrow('FEEDERWRIGHT_SESSION_SECRET: got 16 characters, expected at least 32 characters');
    expect(read).not.toThrow('too-short-secret');
  });

  it('takes the closing slash from the public address, so that links are not written with two', () => {
    const config = readConfig({ ...enough, FEEDERWRIGHT_PUBLIC_URL: 'https://desk.example/' });
    expect(config.publicUrl).toBe('https://desk.example');
  });
});

describe('writeEnvironment', () => {
  it('gives back the same configuration, when it is read again', () => {
    const config = {
      ...readConfig(enough),
      port: 1234,
      publicUrl: 'https://desk.example',
      demo: true,
      production: false,
      logLevel: 'debug' as const,
      runLeaseSeconds: 5,
      sweepSeconds: 2,
      queuedGraceSeconds: 0,
      outboxSeconds: 7,
      computeSeconds: 9,
      signInTurnSeconds: 11,
      trustProxy: 'loopback' as const,
      mailFrom: 'Desk <desk@utility.example>',
      clientDir: '/tmp/client',
      computeFile: '/tmp/compute.js',
      demoAccountsFile: '/tmp/accounts.json',
    };
    expect(readConfig(writeEnvironment(config))).toEqual(config);
  });

  it('sets the clock of every process to UTC', () => {
    expect(writeEnvironment(readConfig(enough)).TZ).toBe('UTC');
  });
});
