import { describe, expect, it } from 'vitest';
import { readConfig } from '$lib/server/config-schema';

const least = { DATABASE_URL: 'postgres://nullwright@127.0.0.1/nullwright' };

describe('the configuration', () => {
  it('has a default for everything but the database', () => {
    expect(readConfig(least)).toMatchObject({
      mode: 'production',
      dataDir: '.data',
      uploadLimitBytes: 2_000_000_000,
      smtpUrl: undefined,
    });
    expect(() => readConfig({})).toThrow(/DATABASE_URL is missing.*got: nothing/);
  });

  it('names each wrong variable with the value it got', () => {
    const wrong = { ...least, NULLWRIGHT_MODE: 'demonstration', UPLOAD_LIMIT_BYTES: 'two' };
    expect(() => readConfig(wrong)).toThrow(/NULLWRIGHT_MODE .*\(got: demonstration\)/);
    expect(() => readConfig(wrong)).toThrow(/UPLOAD_LIMIT_BYTES .*\(got: two\)/);
  });

  it('never repeats an address that may hold a password', () => {
    const wrong = { DATABASE_URL: 'mysql://lab:hush@db/x', SMTP_URL: 'lab:hush@mail:587' };
    expect(() => readConfig(wrong)).toThrow(/DATABASE_URL must begin with postgres:.*\n.*SMTP_URL/);
    expect(() => readConfig(wrong)).not.toThrow('hush');
  });
});
