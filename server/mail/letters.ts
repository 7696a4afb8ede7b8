import { facts, link, list, paragraph, quote, type Letter } from './blocks.ts';
import type { MailKind } from './messages.ts';

const aboutProject = facts(['Application', '{{ reference }}'], ['Project', '{{ projectName }}']);
const keepsRecord = paragraph(
  'You can follow each step, and read everything that was sent, on the page of your application.',
);

/** The words of each kind of mail. */
export const letters: Record<MailKind, Letter> = {
  submitted: {
    subject: '{{ reference }}: we have received your application',
    heading: 'We have received your application',
    blocks: [
      facts(
        ['Application', '{{ reference }}'],
        ['Project', '{{ projectName }}'],
        ['Received on', '{{ receivedOn | on }}'],
        ['We check it by', '{{ completenessDueOn | on }}'],
      ),
      paragraph(
        'An engineer now checks that everything needed is there. By {{ completenessDueOn | on }} you hear either that the application is complete, or what is missing.',
      ),
      paragraph(
        'A first screening on the feeder as it stands today starts at once. Its findings appear on the page of your application; they are preliminary.',
      ),
      link('Open the application'),
    ],
  },
  deficiency: {
    subject: '{{ reference }}: something is missing from your application',
    heading: 'Something is missing from your application',
    blocks: [
      aboutProject,
      list('What we need from you', 'items', '{{ item.section | section_words }}: {{ item.text }}'),
      paragraph(
        'Reply by {{ replyDueOn | on }}: change the answers on the page of your application and submit it again. Our time limit is paused until then.',
      ),
      link('Change the answers'),
    ],
  },
  complete: {
    subject: '{{ reference }}: your application is complete',
    heading: 'Your application is complete',
    blocks: [
      facts(
        ['Application', '{{ reference }}'],
        ['Project', '{{ projectName }}'],
        ['Queue position', '{{ queuePosition }}'],
        ['Initial review by', '{{ reviewDueOn | on }}'],
      ),
      paragraph(
        'The application has its place in the queue, and the initial review has begun. The project is screened on the feeder as it will be with every project ahead of it in the queue.',
      ),
      paragraph('You hear of the decision by {{ reviewDueOn | on }}.'),
      link('Open the application'),
    ],
  },
  'screening-done': {
    subject:
      '{{ reference }}: the {% if runKind == "official" %}screening{% else %}first screening{% endif %} is done',
    heading: 'The {% if runKind == "official" %}screening{% else %}first screening{% endif %} is done',
    blocks: [
      aboutProject,
      paragraph(
        'Your project has been screened on the feeder as it stands today. The findings are preliminary: they can change until your application is complete and has its place in the queue. You can read them on the page of your application.',
        'runKind == "preliminary"',
      ),
      paragraph(
        'Your project has been screened on the feeder with every project ahead of it in the queue. An engineer now reads the findings; they reach you with the decision.',
        'runKind == "official"',
      ),
      link('Open the application'),
      { kind: 'caution' },
    ],
  },
  decision: {
    subject:
      '{{ reference }}: {% case decision %}{% when "approve" %}approved{% when "require-study" %}a study is required{% else %}denied{% endcase %}',
    heading:
      '{% case decision %}{% when "approve" %}Your project is approved{% when "require-study" %}Your project needs a study{% else %}Your project is denied{% endcase %}',
    blocks: [
      aboutProject,
      quote('The reason', '{{ reason }}'),
      quote('Conditions', '{{ conditions }}', 'conditions'),
      paragraph(
        'The decision rests on the screening below. Each line names the question, what was computed, and the limit it was compared with.',
        'findings.size > 0',
      ),
      { kind: 'findings' },
      list(
        'Findings that were set aside, and why',
        'waivers',
        '{{ item.question }} {{ item.reason }}',
        'waivers.size > 0',
      ),
      paragraph('An agreement follows; you hear when it is ready to sign.', 'decision == "approve"'),
      paragraph(
        'You hear next about the scope of the study. Your place in the queue is kept.',
        'decision == "require-study"',
      ),
      keepsRecord,
      link('Open the application'),
      { kind: 'caution' },
    ],
  },
  withdrawn: {
    subject: '{{ reference }}: your application is withdrawn',
    heading: 'Your application is withdrawn',
    blocks: [
      aboutProject,
      quote('The reason given', '{{ reason }}'),
      paragraph(
        'Its place in the queue is given up. What was handed in is kept as a record; a new application starts afresh.',
      ),
      link('Open the application'),
    ],
  },
  moved: {
    subject: '{{ reference }}: {{ stage | stage_words | downcase }}',
    heading: '{{ stage | stage_words }}',
    blocks: [
      facts(
        ['Application', '{{ reference }}'],
        ['Project', '{{ projectName }}'],
        ['It now stands at', '{{ stage | stage_words }}'],
      ),
      paragraph('{{ stage | stage_meaning }}'),
      quote('What we noted', '{{ note }}'),
      keepsRecord,
      link('Open the application'),
    ],
  },
};
