/** The lists that imports take, as the OpenAPI document shows them. They arrive as streams, so nothing here validates them. */
import { z } from 'zod';
import type { EntryKind } from '../../db/entries.ts';

/** A list of lamps as a spreadsheet in much of Europe writes it, and one of dimmers with commas; tests import both. */
export const CSV_EXAMPLES: { readonly [kind in EntryKind]: string } = {
  lamp: [
    'id;name;tags;ratedPower_W;load.kind;load.points;load.power_W;load.capacitance_uF;input.capacitance_nF',
    'attic-7w;Attic candle;attic|warm;7,5;iv-table;0:0 60:0 325:52,5;;;47',
    'hall-6w;Hall globe;hall;6;reservoir;;5,6;4,7;',
  ].join('\n'),
  dimmer: ['id,name,latchingCurrent_mA,holdingCurrent_mA,snubber', 'bedroom,Bedroom door,60,35,null'].join('\n'),
};

export function importBody(kind: EntryKind) {
  const entry = kind === 'lamp' ? 'LampEntry' : 'DimmerEntry';
  return z.unknown().describe(
    `\`application/json\`: an array of ${entry}, each with its \`id\`. \`application/x-ndjson\`: the same, one a line.

\`text/csv\`: a header row with \`id\` and the fields of ${entry}, nested ones with dots, those of the ${kind} itself without \`${kind}.\`; then a row for each ${kind}. Cells are separated by commas, semicolons or tabs. An empty cell is a value that is not given; \`null\` is a part that is absent; tags are separated by \`|\`; a table of points is pairs, \`0:0 60:0 325:52\`. UTF-8 unless \`charset\` says windows-1252 or utf-16le.

\`\`\`text
${CSV_EXAMPLES[kind]}
\`\`\``,
  );
}
