/** What the name of a thing says about its unit, scale or angle: `log10_rho`, `temp_K`, `theta_deg`, `lT`. */
import type { Claim } from '../../model/interface.ts';
import type { Position } from '../../model/place.ts';

const SUFFIX_UNITS: Readonly<Record<string, string>> = {
  K: 'K',
  kelvin: 'K',
  degC: 'degC',
  celsius: 'degC',
  C: 'degC',
  degF: 'degF',
  F: 'degF',
  cm: 'cm',
  mm: 'mm',
  km: 'km',
  m: 'm',
  nm: 'nm',
  um: 'um',
  micron: 'um',
  fm: 'fm',
  pc: 'pc',
  kpc: 'kpc',
  Mpc: 'Mpc',
  au: 'au',
  AU: 'au',
  angstrom: 'angstrom',
  meters: 'm',
  metres: 'm',
  ft: 'ft',
  g: 'g',
  kg: 'kg',
  msun: 'Msun',
  Msun: 'Msun',
  amu: 'u',
  lb: 'lb',
  s: 's',
  sec: 's',
  secs: 's',
  seconds: 's',
  ms: 'ms',
  us: 'us',
  ns: 'ns',
  min: 'min',
  minutes: 'min',
  hr: 'h',
  hrs: 'h',
  hours: 'h',
  days: 'd',
  yr: 'yr',
  years: 'yr',
  Myr: 'Myr',
  Gyr: 'Gyr',
  Pa: 'Pa',
  hPa: 'hPa',
  kPa: 'kPa',
  MPa: 'MPa',
  GPa: 'GPa',
  bar: 'bar',
  mbar: 'mbar',
  mb: 'mbar',
  atm: 'atm',
  erg: 'erg',
  J: 'J',
  kJ: 'kJ',
  eV: 'eV',
  ev: 'eV',
  keV: 'keV',
  kev: 'keV',
  MeV: 'MeV',
  mev: 'MeV',
  GeV: 'GeV',
  kcal: 'kcal',
  cal: 'cal',
  W: 'W',
  kW: 'kW',
  MW: 'MW',
  Hz: 'Hz',
  kHz: 'kHz',
  MHz: 'MHz',
  GHz: 'GHz',
  mol: 'mol',
  kmol: 'kmol',
  deg: 'deg',
  degrees: 'deg',
  degree: 'deg',
  rad: 'rad',
  radians: 'rad',
  percent: '%',
  gcc: 'g/cm3',
  gcm3: 'g/cm3',
  kgm3: 'kg/m3',
  mps: 'm/s',
  kms: 'km/s',
  barns: 'b',
  barn: 'b',
};

/** Short suffixes that are as often an index, a species or a direction: only behind a name that says a fitting quantity. */
const NEEDS_QUANTITY: Readonly<Record<string, RegExp>> = {
  K: /^(?:t|temp|temperature|tsurf|tair|ts|t\d|tmin|tmax|dt|tc|tk|eos_t)/i,
  C: /^(?:t|temp|temperature|tair|tsurf|ts)$/i,
  F: /^(?:temp|temperature)$/i,
  m: /(?:height|depth|length|width|radius|dist|distance|alt|altitude|elev|elevation|thick|thickness|wavelength|diam|diameter|dx|dy|dz|size)$/i,
  g: /(?:mass|weight)$/i,
  s: /(?:time|dt|duration|period|interval|timeout)$/i,
  J: /(?:energy|heat|work)$/i,
  W: /(?:power|flux|luminosity|heat)$/i,
  min: /(?:time|duration|period|interval)$/i,
  ms: /(?:time|duration|interval|timeout|delay)$/i,
  us: /(?:time|duration|interval)$/i,
  cal: /(?:energy|heat)$/i,
  atm: /(?:p|press|pressure)$/i,
  bar: /(?:p|press|pressure)$/i,
  mb: /(?:p|press|pressure)$/i,
  au: /(?:dist|distance|radius|axis)$/i,
  pc: /(?:dist|distance|radius|length)$/i,
  rad: /(?:lat|lon|angle|theta|phi|zenith|azimuth|latitude|longitude|alpha|beta|psi|tilt|inclination|obliquity)$/i,
  ft: /(?:height|alt|altitude|depth|length)$/i,
  lb: /(?:mass|weight)$/i,
  hr: /(?:time|duration|period|interval|dt)$/i,
  days: /(?:time|duration|period|age|half_?life|dt|interval)$/i,
  years: /(?:time|duration|period|age|half_?life|dt|interval)$/i,
  mol: /(?:amount|n)$/i,
};

const LOG_QUANTITY =
  /^(?:t|temp|temperature|rho|density|dens|d|p|pres|press|pressure|e|eint|energy|ener|s|entropy|entr|r|q|z|m|mass|g|kappa|opacity|n|ne|nh|l|lum|lambda|rate|ye|eps)$/i;

/**
 * Claims that a name makes by itself.
 *
 * @param name    as the language spells it
 * @param parent  what it belongs to
 */
export function claimsFromName(name: string, position: Position, parent: string | null): Claim[] {
  if (name.length < 2 || name.length > 80) return [];
  const claims: Claim[] = [];
  const say = (what: Claim['what'], value: string) =>
    claims.push({ name, parent, what, value, text: name, from: 'name', line: position.line, column: position.column });
  const log = logBase(name);
  if (log !== null) say('log-base', log);
  const cut = name.lastIndexOf('_');
  if (cut > 0 && cut < name.length - 1) {
    const suffix = name.slice(cut + 1);
    const unit = Object.hasOwn(SUFFIX_UNITS, suffix) ? SUFFIX_UNITS[suffix] : undefined;
    const rest = name.slice(0, cut);
    // `erg_to_MeV`, `cm_per_km` are factors, `is_deg` a switch, `n_km` a count.
    const factor = /(?:^|_)(?:to|per|from|in|2)(?:_|$)|_2$|^(?:n|num|is|has|use|lg|log|log10|max|min|i|idx)$/i.test(
      rest,
    );
    if (
      unit !== undefined &&
      !factor &&
      (NEEDS_QUANTITY[suffix]?.test(rest.slice(rest.lastIndexOf('_') + 1)) ?? suffix.length > 1)
    ) {
      say('unit', unit);
      if (unit === 'deg') say('angle', 'degrees');
      else if (unit === 'rad') say('angle', 'radians');
    }
  }
  return claims;
}

function logBase(name: string): string | null {
  const plain = /^(?:log10|log_10|logten|lg10)_?(?=\w)/i.exec(name) ?? /_(?:log10|log_10)$/i.exec(name);
  if (plain !== null) return '10';
  if (/^ln_?(?=\w)/.test(name) && LOG_QUANTITY.test(name.replace(/^ln_?/, ''))) return 'e';
  const log = /^(?:log)_?([A-Za-z]\w*)$/i.exec(name);
  // `logt`, `log_rho`: a logarithm of unknown base is mostly the decadic one in tables; `login`, `logical` are words.
  if (log !== null && LOG_QUANTITY.test(log[1]!)) return '10';
  if (/^l(?:T|Rho|rho|P|pres|temp|T9|Pgas|R|Q|E|Y)$/.test(name)) return '10';
  if (/^lg_?(?:t|rho|p|temp|g)$/i.test(name)) return '10';
  return null;
}
