import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { canTellReads } from '../../src/runs/reads.edge.ts';
import { rerunCases } from '../../src/runs/rerun.ts';
import { swapModules } from '../../src/runs/swap.ts';
import { traceCase } from '../../src/runs/trace-case.ts';
import { describeWith } from '../support/tools.ts';
import { CALLER, TinyCode } from './tiny-code.ts';

const EOS = (constant: string) => `      subroutine eos(rho, temp, pres)
      double precision rho, temp, pres
      pres = ${constant} * rho * temp
      end

      subroutine energy(temp, eint)
      double precision temp, eint
      eint = 1.5d0 * 8.314d7 * temp
      end
`;
const FORTRAN = {
  'src/main.f90': `program main
  implicit none
  character(len=512) :: folder
  double precision :: rho, pres, eint
  integer :: i
  call get_command_argument(1, folder)
  open(unit=10, file=trim(folder)//'/profile.dat')
  write(10, '(a)') '# rho pressure energy'
  do i = 1, 50
    rho = 1d-20 * i
    call eos(rho, 1d4, pres)
    call energy(1d4 * i, eint)
    write(10, '(3es24.16)') rho, pres, eint
  end do
end program main
`,
  'src/eos.f': EOS('8.314d7'),
  'src/unused.f': '      subroutine unused\n      end\n',
  'manifests/assembly.yaml': `assembly: gas
plugged: {equation-of-state: eos-old}
build: {run: "gfortran {select.FLAGS} -o run src/main.f90 src/eos.f", makes: [run]}
`,
  'manifests/modules/eos-old.yaml': `module: eos-old
component: equation-of-state
version: 1.0.0
source: {language: fortran, files: [src/eos.f]}
select: {FLAGS: -O0}
needs: [gfortran]
`,
  'manifests/cases/box.yaml': `case: box
run: ./run {out}
outputs:
  - file: profile.dat
    along: rho
    quantities:
      pressure: {dataset: pressure, unit: dyn/cm2, tolerance: {relative: 1e-6}}
      energy: {dataset: energy, unit: erg/g, tolerance: {relative: 1e-6}}
`,
};

describeWith(['gfortran'], 'a Fortran code', () => {
  let code: TinyCode;
  beforeEach(() => {
    code = new TinyCode(FORTRAN);
  });
  afterEach(() => code.remove());

  it('is built, run, and not run again for files that the build does not read', async () => {
    const rerun = () => rerunCases({ root: code.root, manifests: code.manifests(), env: CALLER });
    expect(await rerun()).toMatchObject([{ state: 'no reference', kept: false }]);
    code.write({ 'src/unused.f': '      subroutine unused(x)\n      real x\n      x = 1\n      end\n' });
    expect(await rerun()).toMatchObject([{ kept: canTellReads(code.store) }]);
    code.write({ 'src/eos.f': EOS('8.315d7') });
    expect(await rerun()).toMatchObject([{ kept: false }]);
  });

  describe('whose constant lost its double precision in a tidying commit', () => {
    const trace = async () => {
      const good = code.git('rev-parse', 'HEAD');
      code.write({ README: 'words\n' });
      code.commit('Words');
      code.write({ 'src/eos.f': EOS('8.3144626e7').replace('8.314d7 * temp', '8.314d7*temp') });
      code.commit('Tidy constants');
      code.write({ README: 'more words\n' });
      code.commit('More words');
      const manifests = code.manifests();
      return traceCase({ root: code.root, manifests, env: CALLER, case: 'box', good, bad: 'HEAD' });
    };

    it('is traced to the commit and the module', async () => {
      const { steps } = await trace();
      expect(steps).toMatchObject([
        { quantity: 'pressure', subject: 'Tidy constants', inside: { modules: ['eos-old'] } },
      ]);
    });

    it('is traced to the one subroutine of two that changed', async () => {
      const { steps } = await trace();
      expect(steps[0]!.inside!.procedures).toEqual([{ file: 'src/eos.f', procedure: 'eos' }]);
    });
  });

  it('takes compiler flags for an exchange', async () => {
    const [box] = await swapModules({
      root: code.root,
      manifests: code.manifests(),
      env: CALLER,
      exchanges: [{ of: 'select', name: 'FLAGS', to: '-O3' }],
    });
    expect(box!.runs).toMatchObject([{ exchanges: ['select.FLAGS=-O3'], state: 'compared' }]);
    expect(['bit-for-bit', 'roundoff']).toContain(box!.class);
  });
});
