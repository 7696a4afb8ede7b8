import { createHash } from 'node:crypto';
import { existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { readPdfText } from '../support/pdf-text.ts';
import { caseFile, runStudyCommand } from './study-command.ts';

const folder = mkdtempSync(join(tmpdir(), 'sheet-'));
afterAll(() => rmSync(folder, { recursive: true }));

const study = (...args: string[]) => runStudyCommand(args, { cwd: folder });
const sha256 = (bytes: string | Buffer) => createHash('sha256').update(bytes).digest('hex');

describe('The study command with --sheet', () => {
  it('writes a PDF that names the very bytes of study and result, and prints the result as ever', async () => {
    const { code, stdout, stderr } = await study(caseFile, '--sheet', 'out.pdf', '--paper', 'a4');
    expect({ code, stderr }).toEqual({ code: 0, stderr: '' });
    const pdf = readFileSync(join(folder, 'out.pdf'));
    const printed = readPdfText(pdf).replace(/\s+/g, '');
    expect(printed).toContain(sha256(readFileSync(caseFile)));
    expect(printed).toContain(sha256(stdout));
    expect(stdout).toBe((await study(caseFile)).stdout);
    expect(pdf.toString('latin1')).toContain('/MediaBox [0 0 595');
  });

  it('writes one HTML file', async () => {
    expect((await study(caseFile, '--sheet', 'out.html')).code).toBe(0);
    expect(readFileSync(join(folder, 'out.html'), 'utf8')).toContain('Positive sequence, with the project');
  });

  it('refuses another kind of file, an unknown paper, and a place where nothing can be written', async () => {
    for (const [args, words] of [
      [['--sheet', 'out.txt'], 'got out.txt, expected a name that ends in .pdf or .html'],
      [['--sheet', 'a.pdf', '--paper', 'a5'], '--paper: got a5, expected a4 or letter'],
      [['--sheet', 'nowhere/a.html'], 'nowhere/a.html: got ENOENT'],
    ] as const) {
      const { code, stdout, stderr } = await study(caseFile, ...args);
      expect({ code, stdout }).toEqual({ code: 2, stdout: '' });
      expect(stderr).toContain(words);
    }
  });

  it('refuses a study without a project, of which there is nothing to show', async () => {
    const { project: _, ...bare } = JSON.parse(readFileSync(caseFile, 'utf8')) as Record<string, unknown>;
    writeFileSync(join(folder, 'bare.json'), JSON.stringify(bare));
    const { code, stderr } = await study('bare.json', '--sheet', 'bare.pdf');
    expect(code).toBe(2);
    expect(stderr).toContain('got a study without a project');
    expect(existsSync(join(folder, 'bare.pdf'))).toBe(false);
  });
});
