import type { Block, Letter } from './blocks.ts';

/* The surveyor's sheet in a mail: paper, ink, a copper rule. Readers of mail know inline styles alone. */

const paper = '#efe7d3';
const sheet = '#faf6ec';
const ink = '#221f1a';
const soft = '#595146';
const rule = '#cfc2a3';
const copper = '#964617';
const verdigris = '#27665a';
const madder = '#90241d';
const slab = "'Zilla Slab', Rockwell, Georgia, serif";
const plain = "'IBM Plex Sans', Helvetica, Arial, sans-serif";
const mono = "'IBM Plex Mono', Menlo, Consolas, monospace";

const cell = `padding:8px 10px;border-top:1px solid ${rule};vertical-align:top;font:14px/1.45 ${plain};color:${ink}`;
const figure = `padding:0 10px 6px;vertical-align:top;font:14px/1.45 ${mono};color:${ink}`;
const name = `font:12px/1.3 ${plain};color:${soft}`;
const text = `margin:0 0 16px;font:16px/1.55 ${plain};color:${ink}`;
const label = `margin:24px 0 6px;font:bold 15px/1.3 ${slab};color:${ink}`;

function when(condition: string | undefined, source: string): string {
  return condition === undefined ? source : `{% if ${condition} %}${source}{% endif %}`;
}

const verdictColour = `{% case finding.verdict %}{% when "within" %}${verdigris}{% when "outside" %}${madder}{% else %}${soft}{% endcase %}`;

/* Two rows each, so that it can be read on the narrow screen of a telephone. */
const findings = `{% if findings.size > 0 %}
<table cellspacing="0" cellpadding="0" style="width:100%;border-collapse:collapse;border-bottom:1px solid ${rule};margin:0 0 20px">
{% for finding in findings %}<tbody>
<tr><th scope="rowgroup" colspan="2" style="${cell};text-align:left;font-weight:normal">{{ finding.question }}<br>
<strong style="color:${verdictColour}">{{ finding.words.verdict }}</strong></th></tr>
<tr><td style="${figure};width:50%"><span style="${name}">{{ finding.valueName }}</span><br>{{ finding.words.value }}{% if finding.words.before %}<br>
<span style="${name}">without the project</span><br>{{ finding.words.before }}{% endif %}</td>
<td style="${figure}"><span style="${name}">{{ finding.limitName }}</span><br>{{ finding.words.limit }}</td></tr>
{% if finding.reason %}<tr><td colspan="2" style="padding:0 10px 6px">{{ finding.reason }}</td></tr>{% endif %}
<tr><td colspan="2" style="padding:0 10px 10px;font:12px/1.4 ${plain};color:${soft}">{{ finding.source }}</td></tr>
</tbody>{% endfor %}
</table>{% endif %}`;

function layFacts(facts: { term: string; words: string }[]): string {
  const rows = facts.map(
    ({ term, words }) =>
      `<tr><th scope="row" style="${cell};width:34%;text-align:left;font-weight:normal;color:${soft}">${term}</th><td style="${cell}">${words}</td></tr>`,
  );
  return `<table role="table" cellspacing="0" cellpadding="0" style="width:100%;border-collapse:collapse;border-bottom:1px solid ${rule};margin:0 0 20px">${rows.join('')}</table>`;
}

function layBlock(block: Block): string {
  switch (block.kind) {
    case 'paragraph':
      return when(block.when, `<p style="${text}">${block.words}</p>`);
    case 'quote':
      return when(
        block.when,
        `<h2 style="${label}">${block.heading}</h2><p style="${text};padding-left:14px;border-left:3px solid ${copper};white-space:pre-line">${block.words}</p>`,
      );
    case 'facts':
      return layFacts(block.facts);
    case 'list':
      return when(
        block.when,
        `<h2 style="${label}">${block.heading}</h2><ul style="${text};padding-left:20px">{% for item in ${block.each} %}<li style="margin:0 0 6px;white-space:pre-line">${block.words}</li>{% endfor %}</ul>`,
      );
    case 'findings':
      return findings;
    case 'link':
      return `<p style="${text};margin-top:24px"><a href="{{ applicationUrl }}" style="color:${copper};font-weight:bold">${block.words}</a><br><span style="font:12px/1.4 ${mono};color:${soft};word-break:break-all">{{ applicationUrl }}</span></p>`;
    case 'caution':
      return `<p style="${text};font-size:13px;color:${soft}">{{ caution }}</p>`;
  }
}

/** The Liquid source of a letter as a page of HTML: 600 px, no image, nothing from elsewhere. */
export function layHtml(letter: Letter): string {
  return `<!doctype html>
<html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width"><title>{{ subject }}</title></head>
<body style="margin:0;padding:24px 12px;background:${paper}">
<table role="presentation" cellspacing="0" cellpadding="0" align="center" style="width:100%;max-width:600px;margin:0 auto;background:${sheet};border:1px solid ${rule};border-top:4px solid ${copper}">
<tr><td style="padding:18px 22px;border-bottom:1px solid ${rule};font:14px/1.4 ${slab};color:${soft}">{{ utilityName }}</td></tr>
<tr><td style="padding:26px 22px">
<h1 style="margin:0 0 18px;font:bold 24px/1.25 ${slab};color:${ink}">${letter.heading}</h1>
<p style="${text}">{{ contactName }},</p>
${letter.blocks.map(layBlock).join('\n')}
</td></tr>
<tr><td style="padding:14px 22px;border-top:1px solid ${rule};font:12px/1.5 ${plain};color:${soft}">{{ utilityName }} · {{ contactEmail }}</td></tr>
</table>
</body></html>
`;
}
