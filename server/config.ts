/** The only reader of the environment. Everything else is handed a Config, or a part of one. */

const logLevels = ['silent', 'fatal', 'error', 'warn', 'info', 'debug', 'trace'] as const;
const trustedProxies = ['none', 'loopback'] as const;

/** What db/connection.ts asks for: it is handed its settings and knows no environment. */
interface DatabaseSettings {
  host: string;
  port: number;
  user: string;
  password: string;
  name: string;
}

export interface RedisSettings {
  host: string;
  port: number;
  password: string;
  /** Stands before every key and channel, so that two installations can share one Redis. */
  prefix: string;
}

export interface SmtpSettings {
  host: string;
  port: number;
}

export interface Config {
  /** Always loopback: a proxy that speaks TLS stands in front where others are to reach it. */
  host: '127.0.0.1';
  port: number;
  /** How people reach the desk; the beginning of every mailed link, without a closing slash. */
  publicUrl: string;
  /**
   * `loopback`: a proxy on this machine stands in front, and its X-Forwarded-For says who asks. Only where no other
   * program on this machine can reach the port in its own name, for it could then write that header itself.
   */
  trustProxy: (typeof trustedProxies)[number];
  database: DatabaseSettings;
  redis: RedisSettings;
  smtp: SmtpSettings;
  /** The sender of mail; null: the utility's name and contact address, as its settings give them. */
  mailFrom: string | null;
  sessionSecret: string;
  filesDir: string;
  mailboxDir: string;
  /** Where workers/prepare leaves [{ role, email, password }] for the person who started the demo. */
  demoAccountsFile: string;
  /** The entry of the resident compute child, absolute or from the working directory. */
  computeFile: string;
  /** Where the built pages are; the server serves them itself. */
  clientDir: string;
  /** Seeds the demo, shows its accounts and the mailbox page. */
  demo: boolean;
  production: boolean;
  logLevel: (typeof logLevels)[number];
  /** A run whose worker has not renewed its lease for this long may be taken by another. */
  runLeaseSeconds: number;
  sweepSeconds: number;
  /** A run still queued after this long is taken for lost between commit and enqueue. */
  queuedGraceSeconds: number;
  outboxSeconds: number;
  /** A computation that takes longer is ended. */
  computeSeconds: number;
  /**
   * After ten wrong passwords for one address and account, one more is looked at in this time: ten seconds are 8,640
   * guesses a day.
   */
  signInTurnSeconds: number;
}

type Environment = Record<string, string | undefined>;

class ConfigError extends Error {
  override name = 'ConfigError';
  constructor(problems: string[]) {
    super(`The configuration is not usable:\n${problems.map((problem) => `  - ${problem}`).join('\n')}`);
  }
}

/** Collects every problem before it complains, so that one start shows all that is wrong. */
class EnvironmentReader {
  readonly problems: string[] = [];
  private readonly env: Environment;

  constructor(env: Environment) {
    this.env = env;
  }

  text(name: string, expected: string, fallback?: string): string {
    const value = this.env[name] ?? fallback;
    if (value !== undefined && value !== '') return value;
    this.problems.push(
      `${name}: got ${value === undefined ? 'nothing' : 'an empty value'}, expected ${expected}`,
    );
    return '';
  }

  optionalText(name: string, expected: string): string | null {
    return this.env[name] === undefined ? null : this.text(name, expected);
  }

  secret(name: string, minLength: number): string {
    const expected = `at least ${minLength} characters`;
    const value = this.text(name, expected);
    // The value itself is never printed: what is said here ends in logs.
    if (value !== '' && value.length < minLength) {
      this.problems.push(`${name}: got ${value.length} characters, expected ${expected}`);
    }
    return value;
  }

  integer(name: string, min: number, max: number, fallback?: number): number {
    const expected = `a whole number from ${min} to ${max}`;
    const value = this.text(name, expected, fallback?.toString());
    if (value === '') return min;
    const number = /^\d+$/.test(value) ? Number(value) : Number.NaN;
    if (number >= min && number <= max) return number;
    this.problems.push(`${name}: got "${value}", expected ${expected}`);
    return min;
  }

  oneOf<T extends string>(name: string, choices: readonly T[], fallback: T): T {
    const value = this.env[name] ?? fallback;
    const choice = choices.find((known) => known === value);
    if (choice === undefined) {
      this.problems.push(`${name}: got "${value}", expected one of ${choices.join(', ')}`);
    }
    return choice ?? fallback;
  }

  flag(name: string, fallback: boolean): boolean {
    return this.oneOf(name, ['true', 'false'], fallback ? 'true' : 'false') === 'true';
  }

  url(name: string, fallback: string): string {
    const value = this.text(name, 'an http or https address', fallback);
    const url = URL.canParse(value) ? new URL(value) : undefined;
    if (url === undefined || !/^https?:$/.test(url.protocol)) {
      this.problems.push(`${name}: got "${value}", expected an http or https address`);
    }
    return value.replace(/\/+$/, '');
  }
}

function readDatabase(read: EnvironmentReader): DatabaseSettings {
  return {
    host: read.text('FEEDERWRIGHT_DATABASE_HOST', 'a host name', '127.0.0.1'),
    port: read.integer('FEEDERWRIGHT_DATABASE_PORT', 1, 65535),
    user: read.text('FEEDERWRIGHT_DATABASE_USER', 'a MariaDB user', 'feederwright'),
    password: read.secret('FEEDERWRIGHT_DATABASE_PASSWORD', 1),
    name: read.text('FEEDERWRIGHT_DATABASE_NAME', 'the name of a database', 'feederwright'),
  };
}

function readRedis(read: EnvironmentReader): RedisSettings {
  return {
    host: read.text('FEEDERWRIGHT_REDIS_HOST', 'a host name', '127.0.0.1'),
    port: read.integer('FEEDERWRIGHT_REDIS_PORT', 1, 65535),
    password: read.secret('FEEDERWRIGHT_REDIS_PASSWORD', 1),
    prefix: read.text('FEEDERWRIGHT_REDIS_PREFIX', 'a word before every key', 'feederwright'),
  };
}

export function readConfig(env: Environment = process.env): Config {
  const read = new EnvironmentReader(env);
  const port = read.integer('FEEDERWRIGHT_PORT', 0, 65535, 7400);
  const config: Config = {
    host: '127.0.0.1',
    port,
    publicUrl: read.url('FEEDERWRIGHT_PUBLIC_URL', `http://127.0.0.1:${port}`),
    trustProxy: read.oneOf('FEEDERWRIGHT_TRUST_PROXY', trustedProxies, 'none'),
    database: readDatabase(read),
    redis: readRedis(read),
    smtp: {
      host: read.text('FEEDERWRIGHT_SMTP_HOST', 'a host name', '127.0.0.1'),
      port: read.integer('FEEDERWRIGHT_SMTP_PORT', 1, 65535),
    },
    mailFrom: read.optionalText('FEEDERWRIGHT_MAIL_FROM', 'a sender such as Desk <desk@utility.example>'),
    sessionSecret: read.secret('FEEDERWRIGHT_SESSION_SECRET', 32),
    filesDir: read.text('FEEDERWRIGHT_FILES_DIR', 'a directory for uploads and letters'),
    mailboxDir: read.text('FEEDERWRIGHT_MAILBOX_DIR', 'the directory of the local mailbox'),
    clientDir: read.text('FEEDERWRIGHT_CLIENT_DIR', 'the directory of the built pages', 'dist/client'),
    demoAccountsFile: read.text('FEEDERWRIGHT_DEMO_ACCOUNTS_FILE', 'a file', '.data/demo-accounts.json'),
    computeFile: read.text('FEEDERWRIGHT_COMPUTE_FILE', 'a file', 'dist/server/workers/compute.js'),
    demo: read.flag('FEEDERWRIGHT_DEMO', false),
    production: read.flag('FEEDERWRIGHT_PRODUCTION', true),
    logLevel: read.oneOf('FEEDERWRIGHT_LOG_LEVEL', logLevels, 'info'),
    runLeaseSeconds: read.integer('FEEDERWRIGHT_RUN_LEASE_SECONDS', 1, 3600, 60),
    sweepSeconds: read.integer('FEEDERWRIGHT_SWEEP_SECONDS', 1, 3600, 10),
    queuedGraceSeconds: read.integer('FEEDERWRIGHT_QUEUED_GRACE_SECONDS', 0, 3600, 30),
    outboxSeconds: read.integer('FEEDERWRIGHT_OUTBOX_SECONDS', 1, 3600, 2),
    computeSeconds: read.integer('FEEDERWRIGHT_COMPUTE_SECONDS', 1, 3600, 120),
    signInTurnSeconds: read.integer('FEEDERWRIGHT_SIGN_IN_TURN_SECONDS', 1, 3600, 10),
  };
  if (read.problems.length > 0) throw new ConfigError(read.problems);
  return config;
}

/** The way back: what a process must find in its environment for readConfig to give this Config. */
export function writeEnvironment(config: Config): Record<string, string> {
  return {
    TZ: 'UTC',
    FEEDERWRIGHT_PORT: String(config.port),
    FEEDERWRIGHT_PUBLIC_URL: config.publicUrl,
    FEEDERWRIGHT_DATABASE_HOST: config.database.host,
    FEEDERWRIGHT_DATABASE_PORT: String(config.database.port),
    FEEDERWRIGHT_DATABASE_USER: config.database.user,
    FEEDERWRIGHT_DATABASE_PASSWORD: config.database.password,
    FEEDERWRIGHT_DATABASE_NAME: config.database.name,
    FEEDERWRIGHT_REDIS_HOST: config.redis.host,
    FEEDERWRIGHT_REDIS_PORT: String(config.redis.port),
    FEEDERWRIGHT_REDIS_PASSWORD: config.redis.password,
    FEEDERWRIGHT_REDIS_PREFIX: config.redis.prefix,
    FEEDERWRIGHT_SMTP_HOST: config.smtp.host,
    FEEDERWRIGHT_SMTP_PORT: String(config.smtp.port),
    ...(config.mailFrom === null ? {} : { FEEDERWRIGHT_MAIL_FROM: config.mailFrom }),
    FEEDERWRIGHT_TRUST_PROXY: config.trustProxy,
    FEEDERWRIGHT_SESSION_SECRET: config.sessionSecret,
    FEEDERWRIGHT_FILES_DIR: config.filesDir,
    FEEDERWRIGHT_MAILBOX_DIR: config.mailboxDir,
    FEEDERWRIGHT_CLIENT_DIR: config.clientDir,
    FEEDERWRIGHT_DEMO_ACCOUNTS_FILE: config.demoAccountsFile,
    FEEDERWRIGHT_COMPUTE_FILE: config.computeFile,
    FEEDERWRIGHT_DEMO: String(config.demo),
    FEEDERWRIGHT_PRODUCTION: String(config.production),
    FEEDERWRIGHT_LOG_LEVEL: config.logLevel,
    FEEDERWRIGHT_RUN_LEASE_SECONDS: String(config.runLeaseSeconds),
    FEEDERWRIGHT_SWEEP_SECONDS: String(config.sweepSeconds),
    FEEDERWRIGHT_QUEUED_GRACE_SECONDS: String(config.queuedGraceSeconds),
    FEEDERWRIGHT_OUTBOX_SECONDS: String(config.outboxSeconds),
    FEEDERWRIGHT_COMPUTE_SECONDS: String(config.computeSeconds),
    FEEDERWRIGHT_SIGN_IN_TURN_SECONDS: String(config.signInTurnSeconds),
  };
}

/**
 * What a child process takes over from the person who started us: PATH, HOME and the like, and the settings
 * they made themselves; what is asked for here goes before that.
 */
export function inheritEnvironment(own: Record<string, string>, env: Environment = process.env): Environment {
  return { ...env, TZ: 'UTC', ...own };
}
