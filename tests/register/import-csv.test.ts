import { describe, expect, it } from 'vitest';
import { csv } from '../../src/register/exports/csv.ts';
import { importCsv, readCsv } from '../../src/register/import-csv.ts';
import { standing } from './sample-entry.ts';

describe('a spreadsheet of old results', () => {
  it('becomes an entry a row, whatever its columns are called', () => {
    const { rows, problems } = importCsv(
      'Paper;Year;Authors;Code Version;Modules\n"Shocks; a study";2009;R. Vale and Q. Moor;svn-4711;eos 2.0.3, hydro\n',
    );
    expect(problems).toEqual([]);
    expect(rows).toMatchObject([
      {
        line: 2,
        entry: {
          result: { title: 'Shocks; a study' },
          code: [{ commit: 'svn-4711' }],
          people: [{ name: 'R. Vale' }, { name: 'Q. Moor' }],
          modules: [
            { module: 'eos', version: '2.0.3' },
            { module: 'hydro', version: 'unknown' },
          ],
          dates: { published: '2009' },
        },
      },
    ]);
  });

  it('tells of every line that can not be an entry, and of columns that are not known', () => {
    const { rows, problems } = importCsv(
      'title,people,date,mood\n,R. Vale,2009,good\nA,,2009,\nB,R. Vale,May,\n\nC,R. Vale,2009-05,\n',
    );
    expect(rows.map((one) => one.title)).toEqual(['C']);
    expect(problems.map((one) => one.line)).toEqual([1, 2, 3, 4]);
  });

  it('reads back what the export wrote', () => {
    const { rows } = importCsv(csv([standing()]));
    expect(rows[0]?.entry).toMatchObject({
      result: { title: 'Front temperature', doi: '10.1000/182', figure: '4' },
      code: [{ commit: 'a'.repeat(40) }],
    });
  });

  it('reads quotes, separators and line ends inside fields as RFC 4180, section 2, has them', () => {
    expect(readCsv('"aaa","b ""b"" b","c\r\nc"\r\nzzz,yyy,xxx').map((one) => one.fields)).toEqual([
      ['aaa', 'b "b" b', 'c\r\nc'],
      ['zzz', 'yyy', 'xxx'],
    ]);
    expect(readCsv('a\n"b\nb"\nc').map((one) => one.line)).toEqual([1, 2, 4]);
  });
});
