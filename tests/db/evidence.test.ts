import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { inColumns, inRows, readEvidence, writeEvidence } from '../../db/evidence.ts';
import { askedPairing } from '../../server/schemas/pairing.ts';
import { judgeAsked } from '../../server/simulation/asked-judging.ts';
import { canonicalJson } from '../../server/verdicts/canonical-inputs.ts';
import { toWire } from '../../server/verdicts/judgement-to-wire.ts';
import { completePairing } from '../../server/verdicts/pairing-completion.ts';
import { toModel } from '../../server/verdicts/pairing-to-model.ts';
import { recordedJudgement } from '../../server/verdicts/recorded-judgement.ts';
import { examplePairing } from '../support/server-pairings.ts';

function realVerdict() {
  const completion = completePairing(askedPairing.parse(examplePairing()));
  const { pairing, options } = toModel(completion);
  const outcome = judgeAsked(pairing, options);
  if (!outcome.ok) throw new Error('It was to be judged.');
  return { completion, judgement: outcome.value };
}

/** Without -0, which JSON has no sign for, and without the key that marks columns. */
const json = fc.jsonValue({ maxDepth: 4 }).map((value) => JSON.parse(JSON.stringify(value).replaceAll('"$":', '"S":')));

describe('evidence', () => {
  it('is read back to the letter, whatever JSON it is', () => {
    fc.assert(
      fc.property(json, json, json, (...values) => {
        const [pairing = '', assumptions = '', judgement = ''] = values.map((value) => JSON.stringify(value));
        const evidence = { pairing, assumptions, judgement };
        expect(readEvidence(writeEvidence(evidence))).toEqual(evidence);
      }),
    );
  });

  it('is columns where two or more objects have the same keys in the same order, and rows again', () => {
    const rows = [
      { a: 1, b: { c: null } },
      { a: 2, b: { c: 'x' } },
    ];
    expect(inColumns(rows)).toEqual({
      $: [
        ['a', [1, 2]],
        ['b', { $: [['c', [null, 'x']]] }],
      ],
    });
    expect(inRows(inColumns(rows))).toEqual(rows);
    for (const others of [
      [],
      [{ a: 1 }],
      [{}, {}],
      [{ a: 1 }, { b: 1 }],
      [
        { a: 1, b: 2 },
        { b: 2, a: 1 },
      ],
      [{ a: 1 }, null],
    ]) {
      expect(inColumns(others)).toEqual(others);
    }
  });

  it('refuses the key that marks columns', () => {
    expect(() => inColumns({ $: 1 })).toThrow(/may have the key/);
    expect(() => inColumns([{ $: 1 }, { $: 2 }])).toThrow(/may have the key/);
  });

  it('of a real verdict takes less than a tenth of its JSON', () => {
    const { completion, judgement } = realVerdict();
    const evidence = {
      pairing: canonicalJson(completion.pairing),
      assumptions: JSON.stringify(completion.assumptions),
      judgement: JSON.stringify(judgement),
    };
    const plain = evidence.pairing.length + evidence.assumptions.length + evidence.judgement.length;
    const { content } = writeEvidence({ ...evidence, judgement: JSON.stringify(recordedJudgement(judgement)) });
    expect(content.length).toBeLessThan(plain / 10);
  });

  it('rounds nothing that an answer shows: from the record and straight from the model it is the same', () => {
    const { judgement, completion } = realVerdict();
    const assumed = completion.assumptions.map(({ path }) => path);
    // As text, as it is sent: JSON has no -0.
    expect(JSON.stringify(toWire(recordedJudgement(judgement), assumed))).toBe(JSON.stringify(toWire(judgement, assumed)));
  });

  it('in the encoding of the migration is read too, and in an unknown one is refused', () => {
    const content = Buffer.from('{"pairing":{"a":1.50},"assumptions":[],"judgement":{}}');
    expect(readEvidence({ encoding: 0, content })).toEqual({ pairing: '{"a":1.5}', assumptions: '[]', judgement: '{}' });
    expect(() => readEvidence({ encoding: 7, content })).toThrow(/encoding 7/);
  });
});
