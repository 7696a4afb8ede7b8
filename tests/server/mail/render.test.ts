import { describe, expect, it } from 'vitest';
import type { MailKind, MailPayload } from '../../../server/mail/messages.ts';
import { renderMail } from '../../../server/mail/render.ts';
import { describeFinding } from '../../../shared/finding-words.ts';
import { releaseFindings } from '../../../server/services/released-findings.ts';
import type { Finding } from '../../../shared/schemas/findings.ts';
import { caution } from '../../../shared/wording.ts';

const sender = {
  publicUrl: 'http://127.0.0.1:7400',
  utilityName: 'Fixture Light & Power',
  contactEmail: 'desk@utility.example',
};

const subject = {
  reference: 'FX-1042',
  projectName: 'Saltwick barn roofs',
  contactName: 'Ada Brenn',
  applicationPath: '/projects/abc',
};

const findings: Finding[] = [
  {
    id: 'interrupting-duty',
    question: 'Does everything that interrupts faults keep its margin?',
    verdict: 'outside',
    value: 87.51,
    before: 81.2,
    comparison: '<=',
    limit: 87.5,
    unit: '%',
    consequence: 'supplemental',
    source: 'SGIP 2.2.1.5',
    note: 'The loading at recloser r-17 decides.',
  },
  {
    id: 'transformer-connection',
    question: 'Does the way the project connects suit the type of line?',
    verdict: 'within',
    value: null,
    comparison: '<=',
    limit: null,
    unit: '',
    consequence: 'none',
    source: 'SGIP 2.2.1.6',
  },
];

const payloads: { [K in MailKind]: MailPayload<K> } = {
  submitted: { ...subject, receivedOn: '2026-03-02', completenessDueOn: '2026-03-16' },
  deficiency: {
    ...subject,
    items: [{ section: 'papers', text: 'A one-line diagram\nwith the transformer on it' }],
    replyDueOn: '2026-03-30',
  },
  complete: { ...subject, queuePosition: 7, reviewDueOn: '2026-04-01' },
  'screening-done': { ...subject, runKind: 'preliminary' },
  decision: {
    ...subject,
    decision: 'require-study',
    reason: 'The breaker is close to its rating.',
    conditions: null,
    findings,
    waivers: [{ question: 'Is the grid strong enough here for the project?', reason: 'Looked at by hand.' }],
    runPublicId: 'run',
  },
  withdrawn: { ...subject, reason: 'The site was sold.' },
  moved: { ...subject, stage: 'witness-test', note: 'On 4 May at nine.' },
};

const kinds = Object.keys(payloads) as MailKind[];
const render = (kind: MailKind, more: object = {}) =>
  renderMail(kind, { ...payloads[kind], ...more } as MailPayload<MailKind>, sender);

/** The words of a page without its markup. */
function readHtml(html: string): string {
  const text = html.replace(/<style[\s\S]*?<\/style>/g, '').replace(/<[^>]+>/g, ' ');
  return text
    .replaceAll('&amp;', '&')
    .replaceAll('&lt;', '<')
    .replaceAll('&#39;', "'")
    .replace(/[ \n]+/g, ' ');
}

describe.each(kinds)('the mail "%s"', (kind) => {
  it('says in both forms whom it is for, what it is about and where to go on', () => {
    const { subject: line, text, html } = render(kind);
    expect(line).toContain('FX-1042: ');
    for (const form of [text, readHtml(html)]) {
      expect(form).toContain('Ada Brenn,');
      expect(form).toContain('http://127.0.0.1:7400/projects/abc');
      expect(form).toContain('Fixture Light & Power');
      expect(form).not.toMatch(/\{\{|\{%|undefined|null/);
      expect(form).not.toMatch(/\b(please|sorry|valid)\b/i);
    }
  });

  it('escapes what people wrote in HTML, and keeps it as it is in plain text', () => {
    const nasty = '<img src=x onerror="alert(1)"> & {{ 7 | times: 6 }}';
    const { text, html } = render(kind, { contactName: nasty });
    expect(html).not.toContain('<img');
    expect(html).toContain('&lt;img src=x onerror=&#34;alert(1)&#34;&gt; &amp; {{ 7 | times: 6 }}');
    expect(text).toContain(nasty);
  });

  it('loads nothing: no image, no script, no style sheet, no address but the application', () => {
    const { html } = render(kind);
    expect(html).not.toMatch(/<(img|script|link|iframe|style)\b|url\(/i);
    const addresses = [...html.matchAll(/(?:href|src)="([^"]*)"/g)].map((match) => match[1]);
    expect(new Set(addresses)).toEqual(new Set(['http://127.0.0.1:7400/projects/abc']));
  });
});

it('says why a question could not be answered, as the release words it', () => {
  const lacking: Finding = {
    ...findings[0]!,
    verdict: 'needs-data',
    value: null,
    element: 'r-17',
    note: 'The rating of r-17 is not known.',
  };
  const released = releaseFindings([lacking]);
  const { text, html } = render('decision', { findings: released });
  for (const form of [text, readHtml(html)]) {
    expect(form).toContain(
      'The utility’s records of this feeder lack the interrupting rating of some equipment',
    );
    expect(form).not.toContain('r-17');
  }
});

it('prints the findings of a decision in the words of the screen, without what names a device', () => {
  const { text, html } = render('decision');
  const words = describeFinding(findings[0]!);
  expect(words).toMatchObject({
    value: '87.51\u00a0%',
    before: '81.20\u00a0%',
    limit: 'at most 87.50\u00a0%',
  });
  for (const form of [text, readHtml(html)]) {
    for (const finding of findings) {
      const { value, limit, verdict } = describeFinding(finding);
      for (const word of [finding.question, value, limit, verdict, finding.source])
        expect(form).toContain(word);
    }
    expect(form).toContain('81.20\u00a0%');
    expect(form).toContain('Looked at by hand.');
    expect(form).toContain(caution);
    expect(form).not.toContain('r-17');
  }
});

it.each([
  ['approve', 'approved', 'An agreement follows'],
  ['require-study', 'a study is required', 'scope of the study'],
  ['deny', 'denied', 'denied'],
] as const)('says of the decision "%s" what it is and what follows', (decision, inSubject, inText) => {
  const mail = render('decision', { decision });
  expect(mail.subject).toBe(`FX-1042: ${inSubject}`);
  expect(mail.text).toContain(inText);
});

it('leaves conditions out where there are none, and prints them where there are', () => {
  expect(render('decision').text).not.toContain('Conditions');
  const { text, html } = render('decision', { conditions: 'Trip within 0.16 s.' });
  for (const form of [text, html]) expect(form).toContain('Trip within 0.16 s.');
});

it('names no numbers when a screening is done: an engineer reads them first', () => {
  const official = render('screening-done', { runKind: 'official' });
  expect(official.text).toContain('An engineer now reads the findings');
  expect(official.text).not.toContain('%');
  expect(render('screening-done').text).toContain('preliminary');
});

it('refuses to send a mail with a hole in it', () => {
  const { receivedOn: _missing, ...rest } = payloads.submitted;
  expect(() => renderMail('submitted', rest as MailPayload<'submitted'>, sender)).toThrow('receivedOn');
});

it('keeps the subject on one line', () => {
  expect(render('submitted', { reference: 'FX-1\r\nBcc: x@y.example' }).subject).toBe(
    'FX-1 Bcc: x@y.example: we have received your application',
  );
});
