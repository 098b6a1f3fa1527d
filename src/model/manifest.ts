/**
 * The records that manifests declare, after they were read and found sound. Plain data.
 * The YAML spelling is the same word for word; JSON Schemas are under manifests/schema/.
 */
import type { BumpPolicy } from './bump.ts';
import type { Tolerance } from './deviation.ts';
import type { Excerpt } from './finding.ts';
import type { Intent, Language } from './interface.ts';
import type { Place } from './place.ts';

/** A manifest with the file it came from; `placeOf` finds any part of it by its path of keys and indices. */
export interface Declaration<T> {
  readonly file: string;
  readonly value: T;
  /** The place of the nearest part that exists; `key` points at the key in place of its value. */
  placeOf(path: readonly (string | number)[], part?: 'key' | 'value'): Place;
  /** The text of a line, from 1, for excerpts. */
  lineText(line: number): string;
  /** The line of that place with the characters meant, for a finding. */
  excerptOf(path: readonly (string | number)[], part?: 'key' | 'value'): Excerpt;
}

/** Closed range of states; null is unbounded. In the unit the quantity has at that side of the joint. */
export type Range = readonly [number | null, number | null];
export type Domain = Readonly<Record<string, Range>>;
export type Conventions = Readonly<Record<string, string>>;

export interface Contract {
  readonly contract: string;
  readonly title?: string;
  readonly version: string;
  readonly component: string;
  /** In the order of the arguments of a procedure that offers it. */
  readonly quantities: Readonly<Record<string, ContractQuantity>>;
  /** Names of identities that every offer must satisfy: `first-law`, `maxwell`, `causal-sound-speed`, `detailed-balance`. */
  readonly identities?: readonly string[];
}

export interface ContractQuantity {
  readonly unit: string;
  readonly intent: Intent;
  readonly title?: string;
  /** `scalar` (the default), or the extents by name: `[zones]`, `[zones, species]`. */
  readonly shape?: 'scalar' | readonly string[];
  readonly domain?: Range;
  readonly positive?: boolean;
  readonly optional?: boolean;
  /** A convention's name and the choices open to a module; the first is the default. */
  readonly conventions?: Readonly<Record<string, readonly string[]>>;
}

export interface ModuleManifest {
  readonly module: string;
  readonly title?: string;
  readonly component: string;
  readonly version: string;
  readonly source: ModuleSource;
  readonly offers?: readonly Offer[];
  readonly expects?: readonly Expectation[];
  readonly tables?: readonly TableDeclaration[];
  /** What the build needs to plug this module in; fills `{select.NAME}` in commands. */
  readonly select?: Readonly<Record<string, string | number | boolean>>;
  /** Programs that must exist for this module to run (`gfortran`); without them it is reported as not runnable. */
  readonly needs?: readonly string[];
}

export interface ModuleSource {
  readonly language: Language;
  readonly files: readonly string[];
  /** Those that make the interface; all public ones when absent. */
  readonly procedures?: readonly string[];
}

export interface Offer {
  /** Contract name and semver range of contract versions: `gas-state ^1.2`. */
  readonly contract: string;
  readonly procedure?: string;
  /** Quantity of the contract to the argument, result or table data set that carries it. */
  readonly arguments?: Readonly<Record<string, string>>;
  /** Arguments that carry no quantity: sizes, error codes, switches. */
  readonly besides?: readonly string[];
  /** Where they differ from the contract's. */
  readonly units?: Readonly<Record<string, string>>;
  readonly conventions?: Conventions;
  /** States for which this offer is valid. */
  readonly domain?: Domain;
}

export interface Expectation {
  readonly contract: string;
  /** The quantities that are needed, when not all of the contract. */
  readonly takes?: readonly string[];
  /** The quantities in the order in which they are passed, when not the offer's. */
  readonly order?: readonly string[];
  /** The procedure name that this module calls, where the code names it. */
  readonly calls?: string;
  readonly units?: Readonly<Record<string, string>>;
  readonly conventions?: Conventions;
  /** States that this module can reach when it asks. */
  readonly domain?: Domain;
  readonly optional?: boolean;
  /** Where the code already converts between the two sides of this joint. */
  readonly adapter?: { readonly file: string; readonly procedure?: string };
}

export interface TableDeclaration {
  readonly file: string;
  /** `sha256:` and 64 hexadecimal digits. */
  readonly digest?: string;
  /** Data set or column that is an axis, the quantity it stands for, its unit and spacing. */
  readonly axes?: Readonly<Record<string, TableAxis>>;
}

export interface TableAxis {
  readonly quantity: string;
  readonly unit?: string;
  readonly spacing?: 'linear' | 'log10' | 'ln' | 'uneven';
  readonly range?: Range;
}

export interface Case {
  readonly case: string;
  readonly title?: string;
  /** Command with `{out}`, `{select.NAME}`, `{root}` filled in; split into words, never given to a shell. */
  readonly run: string;
  /** Files the command reads, relative to the repository. */
  readonly inputs?: readonly string[];
  /** Components whose modules this case runs; all plugged ones when absent. */
  readonly uses?: readonly string[];
  /** Modules put in place of the assembly's for this case. */
  readonly with?: Readonly<Record<string, string>>;
  readonly outputs: readonly CaseOutput[];
  readonly features?: Readonly<Record<string, Feature>>;
  /** Names of totals that the run must keep: each names a quantity whose values along the run are compared with the first. */
  readonly conserved?: readonly (string | ConservedTotal)[];
  /** Quantities whose extremes over the outputs make the footprint: component quantity to output quantity. */
  readonly footprint?: Readonly<Record<string, string>>;
  /** Runs that change no physics: what they move is the noise of the code, and is allowed. */
  readonly noise?: Noise;
  /** Quantity or feature to its values on three grids: what the grid itself leaves uncertain. */
  readonly 'grid-error'?: Readonly<Record<string, GridError>>;
  readonly 'time-limit-seconds'?: number;
}

export interface Noise {
  /** Each is one run: `set.FFLAGS=-O3`, `select.RANKS=4`, as on the command line. */
  readonly exchanges?: readonly string[];
  /** Text inputs whose real numbers are moved by one unit in the last place, up or down at random but the same every time. */
  readonly 'last-bit'?: readonly string[];
  /** Runs with the last bit moved; 8 when absent. */
  readonly runs?: number;
}

/** One number on three grids; `ratio` is the spacing of the middle grid over the fine one. */
export interface GridError {
  readonly fine: number;
  readonly middle: number;
  readonly coarse: number;
  readonly ratio: number;
  /** Spacing of the coarse grid over the middle one; `ratio` when absent. */
  readonly 'coarse-ratio'?: number;
  readonly reason?: string;
}

export interface ConservedTotal {
  readonly total: string;
  /** Output quantity that holds its values along the run. */
  readonly of: string;
  readonly tolerance?: Tolerance;
}

export interface CaseOutput {
  readonly file: string;
  /** Data set or column that is the axis of the profile. */
  readonly along?: string;
  /** Data set whose values (ids, coordinates) pair the elements of both sides, when their order may differ. */
  readonly match?: string;
  /** For a log: data set name to the text around its number, `{}` where the number stands: `total energy = {}`. */
  readonly patterns?: Readonly<Record<string, string>>;
  /** For raw binary: the arrays in the order in which they lie in the file. */
  readonly layout?: RawLayout;
  /** The result may lie shifted along the axis by up to `tolerance` (in the axis' unit); it is moved back before it is compared. */
  readonly shift?: { readonly tolerance: number };
  readonly quantities: Readonly<Record<string, OutputQuantity>>;
}

export interface RawLayout {
  readonly 'byte-order'?: 'little' | 'big';
  /** Bytes before the first array. */
  readonly skip?: number;
  readonly arrays: readonly RawArray[];
}

export interface RawArray {
  readonly name: string;
  /** `float64`, `float32`, `int32`, ... */
  readonly type: string;
  readonly shape: readonly number[];
  readonly unit?: string;
}

export interface OutputQuantity {
  readonly dataset: string;
  readonly unit: string;
  readonly tolerance: Partial<Tolerance>;
  /** An amount a cell (mass, energy) and not a value at a point: between unlike grids its total is kept, not its values. */
  readonly extensive?: boolean;
  /** Data set of weights (cell masses, volumes, time steps) for the norms. */
  readonly weight?: string;
  /** For turbulent fields, whose points never agree: compared as power spectrum or as distribution of values. */
  readonly as?: 'spectrum' | 'histogram';
  /** Bins of the histogram; 64 when absent. */
  readonly bins?: number;
}

export interface Feature {
  readonly of: string;
  readonly take:
    | 'maximum'
    | 'minimum'
    | 'where-maximum'
    | 'integral'
    | 'final'
    | 'mean'
    | 'crossing'
    | 'half-width'
    | 'slope'
    | 'period'
    | 'formula';
  /** For `formula`: ordinary notation over the quantities of the case, `maximum(temperature) / mean(temperature)`. */
  readonly formula?: string;
  /** The level that `crossing` looks for. */
  readonly level?: number;
  readonly unit?: string;
  readonly tolerance: Partial<Tolerance>;
}

export interface Assembly {
  readonly assembly: string;
  readonly title?: string;
  /** Component to module. */
  readonly plugged: Readonly<Record<string, string>>;
  readonly build?: {
    readonly run: string;
    /** What it makes, relative to the repository. */
    readonly makes: readonly string[];
    /** Bytes that the build's switches give a declared default, e.g. `{real: 8}`. */
    readonly promote?: Readonly<Record<string, number>>;
    readonly define?: Readonly<Record<string, string>>;
  };
  readonly environment?: {
    /** Variables passed on from the caller; PATH and HOME always are. */
    readonly pass?: readonly string[];
    readonly set?: Readonly<Record<string, string>>;
  };
  readonly executors?: Readonly<Record<string, Executor>>;
  readonly policy?: Partial<BumpPolicy>;
  readonly campaign?: Campaign;
  /** `safety-related` puts the caution into every report. */
  readonly consequence?: 'none' | 'safety-related';
}

export interface Executor {
  readonly kind: 'local' | 'slurm';
  readonly 'at-once'?: number;
  readonly 'time-limit-seconds'?: number;
  readonly 'memory-megabytes'?: number;
  /** Cores that one run takes. */
  readonly cores?: number;
  /** Words put before the command of each run: `mpirun -n 4`. */
  readonly launcher?: string;
}

export interface Campaign {
  readonly title?: string;
  readonly grid: readonly number[];
  readonly fields?: number;
  readonly species?: number;
  readonly 'energy-bins'?: number;
  readonly directions?: number;
  readonly 'bytes-per-value'?: number;
  /** Copies of the state held at once by the scheme. */
  readonly copies?: number;
  readonly steps: number;
  readonly 'output-every'?: number;
  /** Core-seconds for one zone and one step; measured from a case when it is named. */
  readonly cost?: {
    readonly 'core-seconds-per-zone-step'?: number;
    readonly 'measured-by'?: string;
    readonly zones?: number;
    readonly steps?: number;
  };
  readonly allocation?: {
    readonly 'core-hours'?: number;
    readonly 'memory-bytes'?: number;
    readonly 'storage-bytes'?: number;
  };
  /** States that the campaign will visit. */
  readonly domain?: Domain;
}

/** `manifests/accepted.yaml`: findings that may stand, each with a reason. */
export interface Accepted {
  readonly accepted: readonly Acceptance[];
}

/** A finding is accepted when everything that is given here is true of it. */
export interface Acceptance {
  /** The kind of finding. */
  readonly finding: string;
  readonly module?: string;
  readonly file?: string;
  /** Words that its sentence holds. */
  readonly says?: string;
  /** The commit of its place, or the beginning of its id. */
  readonly revision?: string;
  readonly reason: string;
  readonly by?: string;
  /** Last day on which it may stand, `2027-01-31`. */
  readonly until?: string;
}

/** Everything declared for one code, from the files under `manifests/`. */
export interface ManifestSet {
  readonly assembly: Declaration<Assembly> | null;
  readonly modules: ReadonlyMap<string, Declaration<ModuleManifest>>;
  readonly contracts: ReadonlyMap<string, Declaration<Contract>>;
  readonly cases: ReadonlyMap<string, Declaration<Case>>;
  /** Findings that may stand; null when the code accepts none. */
  readonly accepted?: Declaration<Accepted> | null;
}
