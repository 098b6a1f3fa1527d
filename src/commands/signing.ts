/** `--sign KEY`: what is sealed is also signed with an SSH key. */
import { resolve } from 'node:path';
import { SigningFailed, signText } from '../sources/ssh-signature.edge.ts';
import { type Invocation, type OptionSpec, type Surroundings, UsageError } from './command.ts';

export const SIGN: OptionSpec = {
  type: 'string',
  value: 'KEY',
  says: 'sign the seal with this SSH key, by ssh-keygen',
};

/** File of allowed signers, in OpenSSH's form, within the manifests. */
export const SIGNERS = 'allowed-signers';

/** @returns undefined when nothing is to be signed */
export function signerOf({ options }: Invocation, { cwd }: Surroundings): ((seal: string) => string) | undefined {
  const { sign } = options;
  if (typeof sign !== 'string') return undefined;
  const key = resolve(cwd, sign);
  return (seal) => {
    try {
      return signText(seal, key);
    } catch (error) {
      if (error instanceof SigningFailed) throw new UsageError(`nothing was written: ${error.message}`);
      throw error;
    }
  };
}
