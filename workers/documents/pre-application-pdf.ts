import type { Content } from 'pdfmake/interfaces';
import { listPreApplicationItems } from '../../shared/pre-application-words.ts';
import type { PreApplicationReport } from '../../shared/schemas/pre-application-reports.ts';
import { formatInstant } from '../../shared/format.ts';
import { inks, makePdf, printable, ruled, type Paper } from './pdf.ts';

/** A report on paper: whose, of which place, then every item with its value. */
export function makePreApplicationPdf(
  report: PreApplicationReport,
  utility: string,
  timeZone: string,
  paper: Paper,
): Promise<Uint8Array> {
  const { cautions, groups, place } = listPreApplicationItems(report);
  const content: Content[] = [
    { text: 'Pre-application report', style: 'title' },
    { text: printable(place), margin: [0, 0, 0, 2] },
    {
      text: printable(
        `${report.number}, asked for by ${report.requestedBy}, ${report.organisation}, on ${formatInstant(report.requestedAt, timeZone)}.`,
      ),
      style: 'soft',
    },
    ...groups.flatMap(({ heading, items }): Content[] => [
      { text: heading, style: 'heading' },
      {
        layout: ruled,
        table: {
          headerRows: 1,
          dontBreakRows: true,
          widths: ['*', 'auto'],
          body: [
            [
              { text: 'Item', style: 'head' },
              { text: 'Value', style: 'head', alignment: 'right' },
            ],
            ...items.map(({ label, value }) => [
              { text: printable(label) },
              { text: printable(value), style: 'figure', alignment: 'right' as const },
            ]),
          ],
        },
      },
    ]),
    { text: 'How to read it', style: 'heading' },
    { ul: cautions.map((caution) => ({ text: printable(caution) })), color: inks.soft },
  ];
  return makePdf(
    {
      header: `${report.number} · ${place}`,
      footer: 'From the utility’s records as they stood on that day. It reserves nothing.',
      title: `Pre-application report ${report.number}`,
      author: utility,
      content,
      madeAt: new Date(report.requestedAt),
    },
    paper,
  );
}
