import { describe, expect, it } from 'vitest';
import { readAccounts, readJobs, readQueue, standingOf, timeText } from '../../src/runs/slurm-state.ts';

// States as squeue(1) and sacct(1) of Slurm 22.05 list them.
describe('standingOf', () => {
  it.each([
    ['PENDING', { is: 'queued' }],
    ['REQUEUED', { is: 'queued' }],
    ['RUNNING', { is: 'running' }],
    ['COMPLETING', { is: 'running' }],
    ['TIMEOUT', { is: 'over', how: 'timed out', again: true }],
    ['OUT_OF_MEMORY', { is: 'over', how: 'out of memory', again: false }],
    ['PREEMPTED', { is: 'over', how: 'preempted', again: true }],
    ['NODE_FAIL', { is: 'over', how: 'node failed', again: true }],
    ['BOOT_FAIL', { is: 'over', how: 'node failed', again: true }],
    ['CANCELLED by 1000', { is: 'over', how: 'interrupted', again: false }],
    ['CANCELLED+', { is: 'over', how: 'interrupted', again: false }],
  ])('takes %s for what it is', (state, standing) => {
    expect(standingOf(state)).toEqual(standing);
  });
});

it('takes a failed job for out of memory when its output says so', () => {
  // Printed by slurmstepd 22.05 without cgroups.
  const told =
    'JobLaunchFailure slurmstepd-vm: error: StepId=16.batch exceeded memory limit (549523456 > 314572800), being killed';
  expect(standingOf('FAILED', told)).toEqual({ is: 'over', how: 'out of memory', again: false });
  expect(standingOf('FAILED', 'NonZeroExitCode')).toMatchObject({ how: 'ended' });
});

describe('what Slurm prints', () => {
  it('is read from squeue, with the reason for waiting', () => {
    expect(readQueue('12_1 RUNNING None\n12_2 PENDING BeginTime\n')).toEqual(
      new Map([
        ['12_1', { state: 'RUNNING', reason: 'None' }],
        ['12_2', { state: 'PENDING', reason: 'BeginTime' }],
      ]),
    );
  });

  it('is read from scontrol, whose first element has the number of the array', () => {
    const text =
      'JobId=13 ArrayJobId=12 ArrayTaskId=1 JobName=x UserId=a(1) JobState=TIMEOUT Reason=TimeLimit Dependency=(null)\n';
    expect(readJobs(text).get('12_1')).toEqual({ state: 'TIMEOUT', reason: 'TimeLimit' });
  });

  it('is read from sacct', () => {
    expect(readAccounts('12_1|OUT_OF_MEMORY\n12_2|CANCELLED by 0\n').get('12_2')!.state).toBe('CANCELLED by 0');
  });
});

describe('timeText', () => {
  it.each([
    [1, '0-00:01:00'],
    [61, '0-00:02:00'],
    [90_000, '1-01:00:00'],
  ])('writes %s seconds as %s', (seconds, text) => {
    expect(timeText(seconds)).toBe(text);
  });
});
