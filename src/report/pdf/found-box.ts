import type { Show } from '../../runsheet/shown.ts';
import type { PortCondition } from '../../runsheet/types.ts';
import type { FoundTarget } from '../../solve/targets.ts';
import { type Column, words } from '../columns.ts';
import { fine, portName } from '../pump-rows.ts';
import type { ReportedCase } from '../report.ts';
import { BODY_BOLD } from './context.ts';
import type { Section } from './section.ts';

/** Settings told in the box; all are on the page of the settings. */
const MOST_ROWS = 6;
const INSET = 5;

interface FoundIn {
  readonly one: ReportedCase;
  readonly target: FoundTarget;
}

/** Says in a box that these numbers are at settings that were found, the run sheet's beside them. Nothing for other commands. */
export function writeFoundBox(section: Section, cases: readonly ReportedCase[]): void {
  const { paper } = section;
  const rows = cases.flatMap((one) => (one.pump?.targets ?? []).map((target) => ({ one, target })));
  if (rows.length === 0) return;
  const top = paper.y + 2;
  const inner = { x: paper.left + INSET, width: paper.width - 2 * INSET };
  paper.y = top + INSET;
  section.paragraph(HEAD, BODY_BOLD, inner);
  const columns: readonly Column<FoundIn>[] = [
    words('case', ({ one }) => one.name ?? '', 'share'),
    words('port', ({ one, target }) => portName(one.network, target), 'share'),
    words('in the run sheet', ({ one, target }) => conditionText(target.given, one.show)),
    words('found, and used here', ({ one: { show }, target: { response } }) =>
      [fine(show, 'pressure', response.supplyPressurePa.at), fine(show, 'flow', response.flowM3s.at)].join(
        ', or ',
      ),
    ),
  ];
  section.table(rows.slice(0, MOST_ROWS), cases.length > 1 ? columns : columns.slice(1), {
    ...inner,
    size: 7.5,
  });
  section.more(rows.length - MOST_ROWS, 'more, on the page of the pump settings.', inner);
  paper.decoration(() => {
    paper.doc
      .rect(paper.left, top, paper.width, paper.y - top)
      .lineWidth(1)
      .stroke(EDGE);
  });
  paper.y += 4;
}

const EDGE = '#8a5a00';
const HEAD =
  'These settings were found, not given: everything in this document is computed at them, and not at the values of the run sheet.';

function conditionText(condition: PortCondition, show: Show): string {
  switch (condition.kind) {
    case 'pressure':
      return fine(show, 'pressure', condition.pressurePa);
    case 'flow':
      return fine(show, 'flow', condition.flowM3s);
    case 'head':
      return `head ${fine(show, 'length', condition.headM)}`;
    case 'unset':
      return 'not set';
    case 'open':
    case 'sealed':
      return condition.kind;
    default:
      return condition satisfies never;
  }
}
