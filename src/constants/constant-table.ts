/**
 * Physical and astronomical constants by edition, in SI digits, with the unit systems that codes write them in.
 *
 * @source CODATA recommended values: 1973 (J. Phys. Chem. Ref. Data 2, 663), 1986 (Rev. Mod. Phys. 59, 1121),
 * 1998 (72, 351), 2002 (77, 1), 2006 (80, 633), 2010 (84, 1527), 2014 (88, 035009), 2018 (93, 025010), 2022, as listed by NIST.
 * c, G, h, hbar, e, k_B, N_A, m_e, m_p, m_n, m_u, sigma_SB, R, alpha and G_F are checked against tests/checks/constants.json;
 * the editions missing there, and the constants below "written from memory", were not seen in print while this was made.
 * Astronomical constants: IAU 2012 Resolution B2, IAU 2015 Resolutions B2 and B3.
 */

export interface UnitSystem {
  /** `SI`, `cgs`, `eV`, `MeV`, ... */
  readonly system: string;
  readonly unit: string;
  /** Power of ten between the SI digits and these. */
  readonly shift: number;
}

export interface ConstantRecord {
  readonly symbol: string;
  readonly says: string;
  /** Lower-case names that codes give it, the underscores left out. */
  readonly names: RegExp;
  readonly systems: readonly UnitSystem[];
  /** Edition to decimal digits; one text under `exact` for a defined value. */
  readonly values: Readonly<Record<string, string>>;
  readonly source: string;
}

export const CODATA = ['1973', '1986', '1998', '2002', '2006', '2010', '2014', '2018', '2022'] as const;

/** Values of one constant in the order of CODATA; `-` where the edition has none. */
function editions(text: string): Readonly<Record<string, string>> {
  return Object.fromEntries(
    text.split(' ').flatMap((value, index) => (value === '-' ? [] : [[CODATA[index]!, value]])),
  );
}

function systems(text: string): readonly UnitSystem[] {
  return text.split('; ').map((part) => {
    const [system, shift, ...unit] = part.split(' ');
    return { system: system!, shift: Number(shift), unit: unit.join(' ') };
  });
}

const NIST = 'CODATA, as listed by NIST';
const MEMORY = 'CODATA; written from memory';
const IAU = 'IAU 2015 Resolution B3';

export const CONSTANTS: readonly ConstantRecord[] = [
  {
    symbol: 'c',
    says: 'speed of light',
    names: /^(c|cc|clight|cl|cspeed|speedoflight|lightspeed|ccgs|clite|velc|c0|clightcgs|cvac)$/,
    systems: systems('SI 0 m/s; cgs 2 cm/s; km/s -3 km/s'),
    values: editions('299792458 299792458 299792458 299792458 299792458 299792458 299792458 299792458 299792458'),
    source: NIST,
  },
  {
    symbol: 'G',
    says: 'Newtonian constant of gravitation',
    names:
      /^(g|gg|grav|gravity|gnewton|newton|bigg|gconst|gravconst|gravitationalconstant|gravitationalconst|gcgs|newtong|gnewt|ggrav)$/,
    systems: systems('SI 0 m3/kg/s2; cgs 3 cm3/g/s2'),
    values: editions(
      '6.6720e-11 6.67259e-11 6.673e-11 6.6742e-11 6.67428e-11 6.67384e-11 6.67408e-11 6.67430e-11 6.67430e-11',
    ),
    source: NIST,
  },
  {
    symbol: 'h',
    says: 'Planck constant',
    names: /^(h|hh|hplanck|planck|hp|plank|planckh|planckconst|planckconstant|hpl|hcgs)$/,
    systems: systems('SI 0 J s; cgs 7 erg s'),
    values: editions(
      '6.626176e-34 6.6260755e-34 6.62606876e-34 6.6260693e-34 6.62606896e-34 6.62606957e-34 6.626070040e-34 6.62607015e-34 6.62607015e-34',
    ),
    source: NIST,
  },
  {
    symbol: 'hbar',
    says: 'reduced Planck constant',
    names: /^(hbar|planckbar|hb|hbarcgs|plancksreduced)$/,
    systems: systems('SI 0 J s; cgs 7 erg s'),
    values: editions(
      '1.0545887e-34 1.05457266e-34 1.054571596e-34 1.05457168e-34 1.054571628e-34 1.054571726e-34 1.054571800e-34 1.0545718176461563913e-34 1.0545718176461563913e-34',
    ),
    source: NIST,
  },
  {
    symbol: 'e',
    says: 'elementary charge, and the electronvolt',
    names:
      /^(e|qe|qelem|echarge|elementarycharge|electroncharge|ev|ev2erg|evtoerg|electronvolt|mev|mev2erg|mevtoerg|ergev|ergperev|ev2j|evtoj|mevinerg|kev)$/,
    systems: systems('SI 0 C, J/eV; cgs 7 erg/eV; emu -1 abC; keV 10 erg/keV; MeV 13 erg/MeV; SI-MeV 6 J/MeV'),
    values: editions(
      '1.6021892e-19 1.60217733e-19 1.602176462e-19 1.60217653e-19 1.602176487e-19 1.602176565e-19 1.6021766208e-19 1.602176634e-19 1.602176634e-19',
    ),
    source: NIST,
  },
  {
    symbol: 'e_esu',
    says: 'elementary charge, electrostatic',
    names: /^(e|qe|echarge|eesu|qesu|elementarycharge|electroncharge|qelem|qchargecgs)$/,
    systems: systems('cgs 0 esu'),
    values: editions(
      '4.80324238449053600e-10 4.80320679912577140e-10 4.80320419692723596e-10 4.80320440078610740e-10 4.80320427187535046e-10 4.80320450571346770e-10 4.80320467299765926e-10 4.80320471257026372e-10 4.80320471257026372e-10',
    ),
    source: 'CODATA e times c',
  },
  {
    symbol: 'k_B',
    says: 'Boltzmann constant',
    names:
      /^(k|kb|boltz|boltzmann|kboltz|kboltzmann|boltzk|boltzman|kerg|bk|kbol|kbcgs|boltzmannconst|boltzmannconstant|kbz|xkb)$/,
    systems: systems('SI 0 J/K; cgs 7 erg/K'),
    values: editions(
      '1.380662e-23 1.380658e-23 1.3806503e-23 1.3806505e-23 1.3806504e-23 1.3806488e-23 1.38064852e-23 1.380649e-23 1.380649e-23',
    ),
    source: NIST,
  },
  {
    symbol: 'k_B_eV',
    says: 'Boltzmann constant in electronvolts',
    names: /^(k|kb|boltz|boltzmann|kboltz|kev|kbev|kmev|boltzmannconst)$/,
    systems: systems('eV 0 eV/K; keV -3 keV/K; MeV -6 MeV/K; MeV/GK 3 MeV/GK'),
    values: editions(
      '8.61735e-5 8.617385e-5 8.617342e-5 8.617343e-5 8.617343e-5 8.6173324e-5 8.6173303e-5 8.617333262145179e-5 8.617333262145179e-5',
    ),
    source: MEMORY,
  },
  {
    symbol: 'N_A',
    says: 'Avogadro constant',
    names:
      /^(na|avo|avogadro|navo|avog|avn|xnavo|nav|anum|avogadronum|avogadrosnumber|avogadronumber|avogadroconst|xna|avonum|nsuba)$/,
    systems: systems('SI 0 1/mol; SI 3 1/kmol'),
    values: editions(
      '6.022045e23 6.0221367e23 6.02214199e23 6.0221415e23 6.02214179e23 6.02214129e23 6.022140857e23 6.02214076e23 6.02214076e23',
    ),
    source: NIST,
  },
  {
    symbol: 'm_e',
    says: 'electron mass',
    names: /^(me|melectron|electronmass|masselectron|emass|mele|mecgs|melec|massele)$/,
    systems: systems('SI 0 kg; cgs 3 g'),
    values: editions(
      '9.109534e-31 9.1093897e-31 9.10938188e-31 9.1093826e-31 9.10938215e-31 9.10938291e-31 9.10938356e-31 9.1093837015e-31 9.1093837139e-31',
    ),
    source: NIST,
  },
  {
    symbol: 'm_p',
    says: 'proton mass',
    names: /^(mp|mproton|protonmass|massproton|pmass|mpcgs|massprotoncgs|mprot|mprotoncgs)$/,
    systems: systems('SI 0 kg; cgs 3 g'),
    values: editions(
      '1.6726485e-27 1.6726231e-27 1.67262158e-27 1.67262171e-27 1.672621637e-27 1.672621777e-27 1.672621898e-27 1.67262192369e-27 1.67262192595e-27',
    ),
    source: NIST,
  },
  {
    symbol: 'm_n',
    says: 'neutron mass',
    names: /^(mn|mneutron|neutronmass|massneutron|nmass|mneut)$/,
    systems: systems('SI 0 kg; cgs 3 g'),
    values: editions(
      '1.6749543e-27 1.6749286e-27 1.67492716e-27 1.67492728e-27 1.674927211e-27 1.674927351e-27 1.674927471e-27 1.67492749804e-27 1.67492750056e-27',
    ),
    source: NIST,
  },
  {
    symbol: 'm_u',
    says: 'atomic mass constant',
    names: /^(mu|amu|amass|atomicmassunit|unifiedatomicmass|atmass|amc|amumass|uamu|dalton)$/,
    systems: systems('SI 0 kg; cgs 3 g'),
    values: editions(
      '1.6605655e-27 1.6605402e-27 1.66053873e-27 1.66053886e-27 1.660538782e-27 1.660538921e-27 1.660539040e-27 1.66053906660e-27 1.66053906892e-27',
    ),
    source: NIST,
  },
  {
    symbol: 'sigma_SB',
    says: 'Stefan-Boltzmann constant',
    names:
      /^(sigma|sigmasb|ssol|stefan|stefanboltzmann|sb|sigb|sigmab|steboltz|stefboltz|stefanboltzmannconstant|stbo|constb|stebol|sbc|consb)$/,
    systems: systems('SI 0 W/m2/K4; cgs 3 erg/cm2/s/K4'),
    values: editions(
      '5.67032e-8 5.67051e-8 5.670400e-8 5.670400e-8 5.670400e-8 5.670373e-8 5.670367e-8 5.670374419184429454e-8 5.670374419184429454e-8',
    ),
    source: NIST,
  },
  {
    symbol: 'a_rad',
    says: 'radiation constant',
    names: /^(a|arad|aradiation|radconst|asol|radiationconstant|radcon|ar|acgs|arconst)$/,
    systems: systems('SI 0 J/m3/K4; cgs 1 erg/cm3/K4'),
    values: editions(
      '7.565655621095286e-16 7.565912199839846e-16 7.565766506859615e-16 7.565769040999938e-16 7.565768013711607e-16 7.565730853164201e-16 7.565723105793771e-16 7.565733250280005e-16 7.565733250280005e-16',
    ),
    source: '8 pi^5 k^4 / (15 c^3 h^3) with k and h of the CODATA edition',
  },
  {
    symbol: 'R',
    says: 'molar gas constant',
    names:
      /^(r|rgas|gasconst|gascon|gasconstant|rgascon|rg|runiv|ru|ruc|rc|molargas|universalgasconstant|rstar|rgasuniv|gascons|rmol)$/,
    systems: systems('SI 0 J/mol/K; cgs 7 erg/mol/K; SI 3 J/kmol/K'),
    values: editions(
      '8.31441 8.314510 8.314472 8.314472 8.314472 8.3144621 8.3144598 8.31446261815324 8.31446261815324',
    ),
    source: NIST,
  },
  {
    symbol: 'alpha',
    says: 'fine-structure constant',
    names: /^(alpha|alphaem|finestructure|fine|finestructureconstant|alphafs|fsc)$/,
    systems: systems('SI 0 1'),
    values: editions(
      '7.2973506e-3 7.29735308e-3 7.297352533e-3 7.297352568e-3 7.2973525376e-3 7.2973525698e-3 7.2973525664e-3 7.2973525693e-3 7.2973525643e-3',
    ),
    source: NIST,
  },
  {
    symbol: 'G_F',
    says: 'Fermi coupling constant',
    names: /^(gf|gfermi|fermiconstant|gfermiconst)$/,
    systems: systems('GeV 0 GeV-2; MeV -6 MeV-2'),
    values: editions('- - 1.16639e-5 1.16639e-5 1.16637e-5 1.166364e-5 1.1663787e-5 1.1663787e-5 1.1663787e-5'),
    source: NIST,
  },
  {
    symbol: 'hbar_c',
    says: 'hbar c',
    names: /^(hbarc|hc|hbc|hbarcmevfm)$/,
    systems: systems('MeV 0 MeV fm; MeV -13 MeV cm; GeV -3 GeV fm'),
    values: editions(
      '- 197.327053 197.3269602 197.326968 197.3269631 197.3269718 197.3269788 197.3269804593025 197.3269804593025',
    ),
    source: MEMORY,
  },
  {
    symbol: 'm_e c2',
    says: 'electron mass as energy',
    names: /^(me|mec2|mev|melectron|emass|electronmass|masselectron|memev)$/,
    systems: systems('MeV 0 MeV; keV 3 keV; eV 6 eV; GeV -3 GeV'),
    values: editions(
      '- 0.51099906 0.510998902 0.510998918 0.510998910 0.510998928 0.5109989461 0.51099895000 0.51099895069',
    ),
    source: MEMORY,
  },
  {
    symbol: 'm_p c2',
    says: 'proton mass as energy',
    names: /^(mp|mpc2|mproton|protonmass|pmass|massproton|mpmev)$/,
    systems: systems('MeV 0 MeV; GeV -3 GeV; eV 6 eV'),
    values: editions('- 938.27231 938.271998 938.272029 938.272013 938.272046 938.2720813 938.27208816 938.27208943'),
    source: MEMORY,
  },
  {
    symbol: 'm_n c2',
    says: 'neutron mass as energy',
    names: /^(mn|mnc2|mneutron|neutronmass|nmass|massneutron|massneutronmev|mnmev)$/,
    systems: systems('MeV 0 MeV; GeV -3 GeV; eV 6 eV'),
    values: editions('- 939.56563 939.565330 939.565360 939.565346 939.565379 939.5654133 939.56542052 939.56542194'),
    source: MEMORY,
  },
  {
    symbol: 'm_u c2',
    says: 'atomic mass constant as energy',
    names: /^(amu|mu|muc2|amumev|amu2mev|uc2|mumev|mbmev)$/,
    systems: systems('MeV 0 MeV; GeV -3 GeV; eV 6 eV'),
    values: editions('- 931.49432 931.494013 931.494043 931.494028 931.494061 931.4940954 931.49410242 931.49410372'),
    source: MEMORY,
  },
  {
    symbol: 'h_eV',
    says: 'Planck constant in electronvolts',
    names: /^(h|hplanck|hev|planck|hevs)$/,
    systems: systems('eV 0 eV s; MeV -6 MeV s'),
    values: editions(
      '4.135701e-15 4.1356692e-15 4.13566727e-15 4.13566743e-15 4.13566733e-15 4.135667516e-15 4.135667662e-15 4.135667696923859e-15 4.135667696923859e-15',
    ),
    source: MEMORY,
  },
  {
    symbol: 'sigma_T',
    says: 'Thomson cross section',
    names: /^(sigmat|thomson|sigmathomson|sigth|thomsoncrosssection|sigmath)$/,
    systems: systems('SI 0 m2; cgs 4 cm2'),
    values: editions(
      '- 6.6524616e-29 6.65245854e-29 6.65245873e-29 6.652458558e-29 6.652458734e-29 6.6524587158e-29 6.6524587321e-29 6.6524587051e-29',
    ),
    source: MEMORY,
  },
  {
    symbol: 'a_0',
    says: 'Bohr radius',
    names: /^(a0|abohr|bohr|bohrradius|rbohr)$/,
    systems: systems('SI 0 m; cgs 2 cm; Angstrom 10 Angstrom'),
    values: editions(
      '- 5.29177249e-11 5.291772083e-11 5.291772108e-11 5.2917720859e-11 5.2917721092e-11 5.2917721067e-11 5.29177210903e-11 5.29177210544e-11',
    ),
    source: MEMORY,
  },
  {
    symbol: 'Ry',
    says: 'Rydberg energy',
    names: /^(ry|rydberg|ryd|rydbergev|hionpot|ryev)$/,
    systems: systems('eV 0 eV'),
    values: editions(
      '- 13.6056981 13.60569172 13.6056923 13.60569193 13.60569253 13.605693009 13.605693122994 13.605693122990',
    ),
    source: MEMORY,
  },
  {
    symbol: 'au',
    says: 'astronomical unit',
    names: /^(au|astronomicalunit|aucgs|aucm|auincm)$/,
    systems: systems('SI 0 m; cgs 2 cm; km -3 km'),
    values: { 'IAU 2012': '149597870700' },
    source: 'IAU 2012 Resolution B2',
  },
  {
    symbol: 'pc',
    says: 'parsec',
    names: /^(pc|parsec|pccm|pccgs|kpc|mpc|pcincm|kpccm|mpccm|megaparsec|kiloparsec)$/,
    systems: systems('SI 0 m; cgs 2 cm; kpc 5 cm/kpc; Mpc 8 cm/Mpc; kpc 3 m/kpc; Mpc 6 m/Mpc; Mpc 3 km/Mpc'),
    values: { 'IAU 2015': '3.0856775814913673e16' },
    source: 'IAU 2015 Resolution B2: 648000/pi au',
  },
  {
    symbol: 'ly',
    says: 'light year',
    names: /^(ly|lightyear|lyr)$/,
    systems: systems('SI 0 m; cgs 2 cm'),
    values: { exact: '9460730472580800' },
    source: 'c times the Julian year',
  },
  {
    symbol: 'R_sun',
    says: 'nominal solar radius',
    names: /^(rsun|rsol|rsolar|solarradius|solarr|rsuncgs|radiussun|solarradcgs)$/,
    systems: systems('SI 0 m; cgs 2 cm; km -3 km'),
    values: { 'IAU 2015': '6.957e8' },
    source: IAU,
  },
  {
    symbol: 'L_sun',
    says: 'nominal solar luminosity',
    names: /^(lsun|lsol|lsolar|solarluminosity|solarl|lsuncgs)$/,
    systems: systems('SI 0 W; cgs 7 erg/s'),
    values: { 'IAU 2015': '3.828e26' },
    source: IAU,
  },
  {
    symbol: 'GM_sun',
    says: 'nominal solar mass parameter',
    names: /^(gmsun|musun|gmsol)$/,
    systems: systems('SI 0 m3/s2; cgs 6 cm3/s2'),
    values: { 'IAU 2015': '1.3271244e20' },
    source: IAU,
  },
  {
    symbol: 'M_sun',
    says: 'solar mass',
    names: /^(msun|msol|msolar|solarmass|solarm|msuncgs|masssun|solarmasscgs|sunmass)$/,
    systems: systems('SI 0 kg; cgs 3 g'),
    values: {
      '1986': '1.9889194450730526e30',
      '1998': '1.98879724262e30',
      '2006': '1.98841582912e30',
      '2010': '1.98854691e30',
      '2014': '1.98847541534e30',
      '2018': '1.988409870698051e30',
      '2022': '1.988409870698051e30',
      'common practice 1.989e33 g': '1.989e30',
      'common practice 1.9891e33 g': '1.9891e30',
      'common practice 1.98892e33 g': '1.98892e30',
      'common practice 1.9885e33 g': '1.9885e30',
    },
    source: 'IAU 2015 Resolution B3 (GM_sun) with G of the CODATA edition; rounded literals are common practice',
  },
  {
    symbol: 'GM_earth',
    says: 'nominal terrestrial mass parameter',
    names: /^(gmearth|muearth)$/,
    systems: systems('SI 0 m3/s2; cgs 6 cm3/s2'),
    values: { 'IAU 2015': '3.986004e14' },
    source: IAU,
  },
  {
    symbol: 'R_earth',
    says: 'nominal terrestrial equatorial radius',
    names: /^(rearth|earthradius|rearthcgs|radiusearth)$/,
    systems: systems('SI 0 m; cgs 2 cm; km -3 km'),
    values: { 'IAU 2015': '6.3781e6' },
    source: IAU,
  },
  {
    symbol: 'S_sun',
    says: 'nominal total solar irradiance',
    names: /^(s0|ssun|tsi|solarconstant|solarirradiance)$/,
    systems: systems('SI 0 W/m2; cgs 3 erg/cm2/s'),
    values: { 'IAU 2015': '1361' },
    source: IAU,
  },
  {
    symbol: 'L_bol0',
    says: 'luminosity at bolometric magnitude zero',
    names: /^(lbol0|l0bol)$/,
    systems: systems('SI 0 W; cgs 7 erg/s'),
    values: { 'IAU 2015': '3.0128e28' },
    source: 'IAU 2015 Resolution B2',
  },
  {
    symbol: 'year',
    says: 'length of a year',
    names: /^(yr|year|years|secyer|secperyear|yearsec|yrs|syr|secinyear)$/,
    systems: systems('SI 0 s; Myr 6 s/Myr; Gyr 9 s/Gyr; kyr 3 s/kyr'),
    values: {
      exact: '31557600',
      'common practice: 365 d': '31536000',
      'tropical, 3.1556926e7 s': '31556926',
      'common practice: 3.1558149984e7 s': '3.1558149984e7',
    },
    source: 'IAU; other lengths of a year are common practice',
  },
];

/** Numbers of mathematics that codes write out; a double holds 17 digits of them. */
export const MATHEMATICAL: readonly { readonly symbol: string; readonly value: string; readonly names: RegExp }[] = [
  { symbol: 'pi', value: '3.141592653589793238462643', names: /^(pi|mpi|xpi|pie|dpi|pival|rpi|cpi)$/ },
  { symbol: '2 pi', value: '6.283185307179586476925287', names: /^(twopi|pi2|tpi|pix2|p2)$/ },
  { symbol: '4 pi', value: '12.56637061435917295385057', names: /^(fourpi|pi4|fpi)$/ },
  { symbol: '4 pi / 3', value: '4.188790204786390984616858', names: /^(fourpi3|fourthirdpi|fourpithird|pi43|volfac)$/ },
  { symbol: 'pi / 2', value: '1.570796326794896619231322', names: /^(halfpi|pihalf|piby2|pio2)$/ },
  { symbol: '1 / pi', value: '0.3183098861837906715377675', names: /^(pii|invpi|oneoverpi)$/ },
  { symbol: 'pi / 180', value: '0.01745329251994329576923691', names: /^(rad|deg2rad|degtorad|dtor|d2r|torad)$/ },
  { symbol: '180 / pi', value: '57.29577951308232087679815', names: /^(deg|rad2deg|radtodeg|rtod|r2d)$/ },
  { symbol: 'sqrt(pi)', value: '1.772453850905516027298167', names: /^(sqrtpi|rootpi|sqpi)$/ },
  { symbol: 'ln 10', value: '2.302585092994045684017991', names: /^(ln10|log10e|aln10|clog10|xln10)$/ },
  { symbol: 'log10 e', value: '0.4342944819032518276511289', names: /^(loge|log10e|dloge)$/ },
  { symbol: 'ln 2', value: '0.6931471805599453094172321', names: /^(ln2|log2|aln2|xln2)$/ },
  { symbol: "Euler's number", value: '2.718281828459045235360287', names: /^(euler|exp1|napier)$/ },
  { symbol: 'sqrt(2)', value: '1.414213562373095048801689', names: /^(sqrt2|root2|sq2)$/ },
  { symbol: 'sqrt(3)', value: '1.732050807568877293527446', names: /^(sqrt3|root3|sq3)$/ },
  {
    symbol: "Euler's gamma",
    value: '0.5772156649015328606065121',
    names: /^(eulergamma|gammaeuler|egamma|gammae|mascheroni)$/,
  },
];
