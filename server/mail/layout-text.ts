import type { Block, Letter } from './blocks.ts';

function when(condition: string | undefined, source: string): string {
  return condition === undefined ? source : `{% if ${condition} %}${source}{% endif %}`;
}

const findings = [
  '{% for finding in findings %}',
  '{{ finding.question }}\n',
  '  {{ finding.words.verdict }}\n',
  '  {{ finding.valueName }}: {{ finding.words.value }}',
  '{% if finding.words.before %} (without the project {{ finding.words.before }}){% endif %}\n',
  '  {{ finding.limitName }}: {{ finding.words.limit }}\n',
  '{% if finding.reason %}  Why: {{ finding.reason }}\n{% endif %}',
  '  Source: {{ finding.source }}\n\n',
  '{% endfor %}',
].join('');

function layBlock(block: Block): string {
  switch (block.kind) {
    case 'paragraph':
      return when(block.when, `${block.words}\n\n`);
    case 'quote':
      return when(block.when, `${block.heading}:\n\n${block.words}\n\n`);
    case 'facts':
      return `${block.facts.map(({ term, words }) => `${term}: ${words}`).join('\n')}\n\n`;
    case 'list':
      return when(
        block.when,
        `${block.heading}:\n\n{% for item in ${block.each} %}- ${block.words}\n{% endfor %}\n`,
      );
    case 'findings':
      return findings;
    case 'link':
      return `${block.words}:\n{{ applicationUrl }}\n\n`;
    case 'caution':
      return '{{ caution }}\n\n';
  }
}

/** The Liquid source of a letter as plain text. */
export function layText(letter: Letter): string {
  const body = letter.blocks.map(layBlock).join('');
  const rule = '-- \n';
  return `{{ contactName }},\n\n${letter.heading}.\n\n${body}${rule}{{ utilityName }}\n{{ contactEmail }}\n`;
}
