import { randomUUID } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { load } from '../../../src/routes/(public)/mail/+page.server';
import { config } from '$lib/server/config';
import { mailPageIsOpen, sendMail } from '$lib/server/mail';
import { invitationMail } from '$lib/server/mail/messages';
import { mailsTo, tokenIn } from '../accounts/fixture';

describe('sendMail', () => {
  it('reaches the local mail server by SMTP, which keeps it whole', async () => {
    const to = `${randomUUID()}@example.org`;
    await sendMail({ to, subject: 'Grüße – 1 < 2', text: 'µV, Δ, −3\n', html: '<p>µV, Δ, −3</p>' });
    const [mail] = await mailsTo(to);
    expect(mail).toMatchObject({ to, subject: 'Grüße – 1 < 2', text: 'µV, Δ, −3\n' });
  });

  it('carries a link of the application with its token unbroken', async () => {
    const email = `${randomUUID()}@example.org`;
    const token = 'A_-'.repeat(14) + 'z';
    await sendMail(
      invitationMail({
        email,
        role: 'viewer',
        teamName: 'Lab <b>&',
        inviterName: 'I. Marlow',
        token,
        days: 7,
      }),
    );
    const [mail] = await mailsTo(email);
    expect(tokenIn(mail)).toBe(token);
    expect(mail!.text).toContain(`${config.origin}/invitation/${token}`);
  });

  it('writes names into HTML as text', () => {
    const { html } = invitationMail({
      email: 'x@example.org',
      role: 'viewer',
      teamName: '<img src=x>',
      inviterName: 'I',
      token: 't',
      days: 7,
    });
    expect(html).toContain('&lt;img src=x&gt;');
    expect(html).not.toContain('<img');
  });
});

describe('the mail page', () => {
  it('is there in demo and development without a mail server only, and 404 here', async () => {
    const mayBeOpen = config.mode === 'demo' || config.mode === 'development';
    expect(mailPageIsOpen).toBe(mayBeOpen && config.smtpUrl === undefined);
    // Tests run in the mode "test", where the page does not exist.
    expect(config.mode).toBe('test');
    await expect(load()).rejects.toMatchObject({ status: 404 });
  });
});
