/**
 * The units by name, a line each: definition | UCUM | VOUnits | UDUNITS | other spellings in comments.
 * A `*` behind a name says that it takes prefixes. A comment may use every name of the line except UCUM's bracketed ones.
 * `$` in a definition stands for a constant, `#` for something counted, `!` for an arbitrary unit with a dimension of its own.
 *
 * @source The Unified Code for Units of Measure 2.2; IVOA Units in the VO (VOUnits) 1.1; UDUNITS-2 database;
 * SI Brochure, 9th edition (BIPM 2019); IAU 2012 B2 and 2015 B2, B3. Spellings in comments are common practice.
 */
export const UNIT_TABLE = `
m := 1 m | m* | m* | m* meter* metre* | meters metres
kg := 1 kg | | | kilogram kilograms | kilogramme kgs
g := 1e-3 kg | g* | g* | g* gram* gramme* | gm gms
s := 1 s | s* | s* | s* second* sec* | seconds secs
A := 1 A | A* | A* | A* ampere* amp* | amperes
K := 1 K | K* | K* | K* kelvin* degK degree_K degrees_K deg_K | kelvins degreeK
mol := 1 mol | mol* | mol* | mol* mole* | moles gmol gram_mole
cd := 1 cd | cd* | cd* | cd* candela* |
rad := 1 | rad* | rad* | radian* rad* | radians
sr := 1 | sr* | sr* | sr* steradian* | steradians ster
one := 1 | | | 1 | nondim nondimensional unitless dimensionless no_unit no_units frac fraction fractional ND
nothing := 1 nothing | | | | flag index count none
percent := 1e-2 | % | % | % percent | pct per_cent
permille := 1e-3 | [ppth] | | | permille permil o/oo
ppm := 1e-6 | [ppm] | | ppm ppmv | ppmv parts_per_million
ppb := 1e-9 | [ppb] | | ppb ppbv | ppbv parts_per_billion
salinity := 1e-3 | | | | psu PSU
ppt := 1e-12 | [pptr] | | ppt pptv | pptv
pi := 1 pi^ | [pi] | | pi |
tenstar := 10 | 10* 10^ | | |
deg := 1/180 pi^ | deg | deg | degree* arc_degree angular_degree arcdeg degrees_angle | degs degrees degree_north degrees_north degrees_east degree_east degN degE degrees_true °
arcmin := 1/10800 pi^ | ' | arcmin* | arcminute* arc_minute arcmin* | arcmins
arcsec := 1/648000 pi^ | '' | arcsec* | arcsecond* arc_second arcsec* | arcsecs asec
mas := 1/648000000 pi^ | | mas | |
gon := 1/200 pi^ | gon deg_g | | grade | grad
turn := 2 pi^ | circ | | turn circle | revolution rev cycle cycles turns
sph := 4 pi^ | sph | | |
uas := 1/648000000000 pi^ | | | |
min := 60 s | min | min | min minute* | mins
h := 3600 s | h | h | h* hour* hr | hrs
d := 86400 s | d | d | d day* | dys
week := 604800 s | wk | | week* | wks
fortnight := 1209600 s | | | fortnight |
julianyear := 31557600 s | a_j a | yr* a* | | julian_year year_julian Julian_year jyr
tropicalyear := 31556925.216 s | a_t | | |
gregorianyear := 31556952 s | a_g | | | gregorian_year
udyear := 31556925.9747 s | | | year* yr* tropical_year tropical_years |
gnuyear := 31556925.9746784 s | | | |
siderealyear := 31558150 s | | | sidereal_year |
siderealday := 86164.09054 s | | | sidereal_day |
commonyear := 31536000 s | | | common_year | noleap_year
leapyear := 31622400 s | | | leap_year |
julianmonth := 2629800 s | mo_j mo | | | julian_month
synodalmonth := 2551442.976 s | mo_s | | lunar_month |
gregorianmonth := 2629746 s | mo_g | | |
udmonth := 2629743.831225 s | | | month |
century := 3155760000 s | | | | julian_century centuries_julian
shake := 1e-8 s | | | shake |
N := 1 kg m s-2 | N* | N* | N* newton* |
Pa := 1 kg m-1 s-2 | Pa* | Pa* | Pa* pascal* |
J := 1 kg m2 s-2 | J* | J* | J* joule* |
W := 1 kg m2 s-3 | W* | W* | W* watt* |
C := 1 A s | C* | C* | C* coulomb* | coul Coul coulombs
V := 1 kg m2 s-3 A-1 | V* | V* | V* volt* |
Ohm := 1 kg m2 s-3 A-2 | Ohm* | Ohm* | ohm* Ω* | Ohms
S := 1 kg-1 m-2 s3 A2 | S* | S* | S* siemens* | mho mhos
F := 1 kg-1 m-2 s4 A2 | F* | F* | F* farad* |
Wb := 1 kg m2 s-2 A-1 | Wb* | Wb* | Wb* weber* |
T := 1 kg s-2 A-1 | T* | T* | T* tesla* |
H := 1 kg m2 s-2 A-2 | H* | H* | H* henry* | henries
Hz := 1 s-1 | Hz* | Hz* | Hz* hertz* | cps
lm := 1 cd | lm* | lm* | lm* lumen* |
lx := 1 cd m-2 | lx* | lx* | lx* lux* |
Bq := 1 s-1 | Bq* | Bq* | Bq* becquerel* |
Gy := 1 m2 s-2 | Gy* | | Gy* gray* |
Sv := 1 m2 s-2 | Sv* | | Sv* sievert* |
kat := 1 mol s-1 | kat* | | kat* katal* |
Ao := 1e-10 m | Ao | Angstrom* angstrom* | angstrom* ångström Å | Ang ang angstroms Angstroms AA Angst
micron := 1e-6 m | | | micron* | microns mu_m
fermi := 1e-15 m | | | fermi | fermis
au := 149597870700 m | AU | AU au | au astronomical_unit ua | astronomical_units a.u.
ly := 9460730472580800 m | [ly]* | lyr* | | ly light_year light_years lightyear
udly := 9.46073e15 m | | | light_year |
pc := 648000/1 au pi^-1 | | pc* | parsec* | parsecs Parsec
ucumpc := 3.085678e16 m | pc* | | |
Rsun := 6.957e8 m | | solRad* Rsun | | R_sun R_Sun RSun Rsol R_sol rsun r_sun R_odot solar_radius solar_radii
Rearth := 6.3781e6 m | | Rearth | | R_earth R_Earth rearth R_E
Rjup := 7.1492e7 m | | Rjup jupiterRad | | R_jup R_Jup R_J
in := 0.0254 m | [in_i] | | in inch inches international_inch | in.
ft := 0.3048 m | [ft_i] | | ft foot feet international_foot |
yd := 0.9144 m | [yd_i] | | yd yard yards |
mi := 1609.344 m | [mi_i] | | mi mile miles international_mile |
fth := 1.8288 m | [fth_i] | | |
nmi := 1852 m | [nmi_i] | | nautical_mile nmile nautical_miles international_nautical_mile | nmi NM
kn := 1852/3600 m s-1 | [kn_i] | | knot knots kt international_knot | kts kn
mil := 2.54e-5 m | [mil_i] | | mil |
hd := 0.1016 m | [hd_i] | | |
ftus := 1200/3937 m | [ft_us] | | US_survey_foot US_survey_feet |
ydus := 3600/3937 m | [yd_us] | | US_survey_yard |
inus := 100/3937 m | [in_us] | | |
rdus := 19800/3937 m | [rd_us] | | rod pole perch |
chus := 79200/3937 m | [ch_us] | | chain |
lkus := 792/3937 m | [lk_us] | | |
fthus := 7200/3937 m | [fth_us] | | fathom |
furus := 792000/3937 m | [fur_us] | | furlong |
mius := 6336000/3937 m | [mi_us] | | US_survey_mile |
milus := 1/39370 m | [mil_us] | | |
inbr := 0.02539998 m | [in_br] | | |
ftbr := 0.30479976 m | [ft_br] | | |
rdbr := 5.02916 m | [rd_br] | | |
chbr := 20.11664 m | [ch_br] | | |
lkbr := 0.2011676 m | [lk_br] | | |
fthbr := 1.82880 m | [fth_br] | | |
pcbr := 0.762 m | [pc_br] | | |
ydbr := 0.9144 m | [yd_br] | | |
mibr := 1609.34 m | [mi_br] | | |
nmibr := 1853.18 m | [nmi_br] | | |
knbr := 0.51477 m s-1 | [kn_br] | | |
acbr := 4046.86 m2 | [acr_br] | | |
lne := 0.002116667 m | [lne] | | |
pnt := 0.000352778 m | [pnt] | | |
pca := 0.004233333 m | [pca] | | |
smoot := 1.7018 m | [smoot] | | |
ar := 100 m2 | ar* | | are* a* |
ha := 10000 m2 | har | | hectare ha | hectares
acre := 4046.872609874252 m2 | [acr_us] | | acre acres |
sqmi := 2589998.47032 m2 | [smi_us] | | |
sct := 2589998.47032 m2 | [sct] | | |
twp := 93239944.9315 m2 | [twp] | | |
srd := 25.2929538117 m2 | [srd_us] | | |
sin := 6.4516e-4 m2 | [sin_i] | | |
sft := 0.09290304 m2 | [sft_i] | | |
syd := 0.83612736 m2 | [syd_i] | | |
cml := 5.067074790974977e-10 m2 | [cml_i] | | |
barn := 1e-28 m2 | b | barn* | barn* b* | barns
cc := 1e-6 m3 | | | cc | ccm
L := 1e-3 m3 | L* l* | l* L* | liter* litre* L* l* | liters litres ltr
cin := 1.6387064e-5 m3 | [cin_i] | | |
cft := 0.028316846592 m3 | [cft_i] | | |
cyd := 0.764554857984 m3 | [cyd_i] | | |
bf := 0.002359737216 m3 | [bf_i] | | |
crd := 3.624556363776 m3 | [cr_i] | | |
st := 1 m3 | st* | | stere |
gal := 0.003785411784 m3 | [gal_us] | | gallon US_liquid_gallon gallons |
bbl := 0.158987294928 m3 | [bbl_us] | | barrel | bbl
qt := 0.000946352946 m3 | [qt_us] | | quart US_liquid_quart |
pt := 0.000473176473 m3 | [pt_us] | | pint US_liquid_pint pt |
gil := 0.00011829411825 m3 | [gil_us] | | gill |
foz := 2.95735295625e-5 m3 | [foz_us] | | fluid_ounce floz |
fdr := 3.6966911953125e-6 m3 | [fdr_us] | | |
minus := 6.1611519921875e-8 m3 | [min_us] | | |
crdus := 3.624556363776 m3 | [crd_us] | | |
bu := 0.03523907016688 m3 | [bu_us] | | bushel |
galwi := 0.00440488377086 m3 | [gal_wi] | | |
pk := 0.00880976754172 m3 | [pk_us] | | peck |
dqt := 0.00110122094272 m3 | [dqt_us] | | |
dpt := 0.000550610471358 m3 | [dpt_us] | | |
tbs := 1.478676478125e-5 m3 | [tbs_us] | | tablespoon |
tsp := 4.92892159375e-6 m3 | [tsp_us] | | teaspoon |
cup := 2.365882365e-4 m3 | [cup_us] | | cup |
fozm := 3e-5 m3 | [foz_m] | | |
cupm := 2.4e-4 m3 | [cup_m] | | |
tspm := 5e-6 m3 | [tsp_m] | | |
tbsm := 1.5e-5 m3 | [tbs_m] | | |
galbr := 0.00454609 m3 | [gal_br] | | Canadian_liquid_gallon UK_liquid_gallon |
pkbr := 0.00909218 m3 | [pk_br] | | |
bubr := 0.03636872 m3 | [bu_br] | | |
qtbr := 0.0011365225 m3 | [qt_br] | | |
ptbr := 0.00056826125 m3 | [pt_br] | | |
gilbr := 0.0001420653125 m3 | [gil_br] | | |
fozbr := 2.84130625e-5 m3 | [foz_br] | | |
fdrbr := 3.5516328125e-6 m3 | [fdr_br] | | |
minbr := 5.919388020833333e-8 m3 | [min_br] | | |
Sverdrup := 1e6 m3 s-1 | | | sverdrup | Sverdrup sverdrups
u := 1 $m_u | u* | u* | u* amu atomic_mass_unit dalton* Da* atomicmassunit | AMU m_u mu_amu
t := 1000 kg | t* | | t* tonne* metric_ton | tonnes
Msun := 1 $GM_sun $G-1 kg | | solMass* Msun* | | M_sun M_Sun MSun Msol M_sol msun m_sun M_odot solar_mass solar_masses Mo
Mearth := 3.986004e14 $G-1 kg | | Mearth geoMass | | M_earth M_Earth mearth earth_mass M_E
Mjup := 1.2668653e17 $G-1 kg | | Mjup jupiterMass | | M_jup M_Jup M_J jupiter_mass
me := 1 $m_e | [m_e] | | | m_e electron_mass
mp := 1 $m_p | [m_p] | | | m_p proton_mass
lb := 0.45359237 kg | [lb_av] | | pound lb avoirdupois_pound pounds | lbs lbm lb_m
oz := 0.028349523125 kg | [oz_av] | | ounce oz avoirdupois_ounce ounces |
dr := 0.0017718451953125 kg | [dr_av] | | |
gr := 6.479891e-5 kg | [gr] | | grain |
scwt := 45.359237 kg | [scwt_av] | | |
lcwt := 50.80234544 kg | [lcwt_av] | | |
ston := 907.18474 kg | [ston_av] | | short_ton ton |
lton := 1016.0469088 kg | [lton_av] | | long_ton |
stone := 6.35029318 kg | [stone_av] | | |
pwt := 0.00155517384 kg | [pwt_tr] | | pennyweight |
oztr := 0.0311034768 kg | [oz_tr] | | troy_ounce |
lbtr := 0.3732417216 kg | [lb_tr] | | troy_pound |
scap := 0.0012959782 kg | [sc_ap] | | |
drap := 0.0038879346 kg | [dr_ap] | | |
ozap := 0.0311034768 kg | [oz_ap] | | |
lbap := 0.3732417216 kg | [lb_ap] | | |
ozm := 0.028 kg | [oz_m] | | |
carm := 2e-4 kg | [car_m] | | carat |
carau := 1/24 | [car_Au] | | |
slug := 14.593902937206364 kg | | | slug | slugs
dyn := 1e-5 kg m s-2 | dyn* | dyn* | dyne* | dynes
erg := 1e-7 kg m2 s-2 | erg* | erg* | erg* | ergs
foe := 1e44 kg m2 s-2 | | | | foe Bethe bethe
P := 0.1 kg m-1 s-1 | P* | | poise* | cP cp
St := 1e-4 m2 s-1 | St* | | stokes St* | cSt
eV := 1 $e J | eV* | eV* | eV* electronvolt* electron_volt | electron-volt electron_volts
Ry := 2.1798723611030e-18 J ~2022 | | Ry* | | rydberg Rydberg rydbergs
hartree := 4.3597447222060e-18 J ~2022 | | | | hartree* Ha Hartree E_h hartrees
cal := 4.184 J | cal_th* | | thermochemical_calorie* | cal_th
ucumcal := 4.184 J | cal* | | |
calIT := 4.1868 J | cal_IT* | | IT_calorie* | cal_IT
udcal := 4.1868 J | | | calorie* cal* |
cal15 := 4.18580 J | cal_[15] | | |
cal20 := 4.18190 J | cal_[20] | | |
calm := 4.19002 J | cal_m | | |
Cal := 4184 J | [Cal] | | | kcal kilocalorie
Btu := 1055.05585262 J | [Btu_IT] | | Btu BTU | btu
Btuth := 1054.350264488889 J | [Btu_th] [Btu] | | |
Btu39 := 1059.67 J | [Btu_39] | | |
Btu59 := 1054.80 J | [Btu_59] | | |
Btu60 := 1054.68 J | [Btu_60] | | |
Btum := 1055.87 J | [Btu_m] | | |
therm := 105505585.262 J | | | therm |
kWh := 3.6e6 J | | | | kWh kilowatt_hour kWhr kwh
Wh := 3600 J | | | | Wh watt_hour
MWh := 3.6e9 J | | | | MWh
TNT := 4.184e9 J | | | ton_TNT | ton_of_TNT tTNT
ktTNT := 4.184e12 J | | | | kton kt_TNT kiloton ktTNT kilotons kiloton_TNT kiloton_of_TNT
MtTNT := 4.184e15 J | | | | Mton Mt_TNT megaton MtTNT megatons
HP := 745.6998715822702 W | [HP] | | horsepower hp |
Lsun := 3.828e26 W | | solLum* Lsun* | | L_sun L_Sun LSun Lsol L_sol lsun l_sun L_odot solar_luminosity
bar := 1e5 Pa | bar* | | bar* | bars
atm := 101325 Pa | atm | | atm atmosphere standard_atmosphere | atmospheres
att := 98066.5 Pa | att | | technical_atmosphere at |
Torr := 101325/760 Pa | | | | Torr torr*
udTorr := 133.322387415 Pa | | | torr mmHg mm_Hg |
mHg := 133322 Pa | m[Hg]* | | |
mH2O := 9806.65 Pa | m[H2O]* | | |
inHg := 3386.3788 Pa | [in_i'Hg] | | inHg inch_Hg |
inH2O := 249.08891 Pa | [in_i'H2O] | | |
psi := 6894.757293168361 Pa | [psi] | | psi |
lbf := 4.4482216152605 N | [lbf_av] | | pound_force lbf | lb_f
gf := 9.80665e-3 N | gf* | | gram_force force_gram gf | kgf
pdl := 0.138254954376 N | | | poundal |
standardgravity := 9.80665 m s-2 | [g] | | standard_free_fall gravity | g_n g0
Gal := 0.01 m s-2 | Gal* | | gal* Gal* |
G := 1e-4 T | G* | G* | gauss* Gs | Gauss
Oe := 250 A m-1 pi^-1 | Oe* | | oersted* Oe | Oersted
Mx := 1e-8 Wb | Mx* | | maxwell* Mx | Maxwell
Gb := 2.5 A pi^-1 | Gb* | | gilbert* |
Bi := 10 A | Bi* | | abampere biot* abamp | abA abampere
abC := 10 C | | | abcoulomb | abC
statA := 1/10 A $c-1 | | | statampere | statA
statC := 1/10 C $c-1 | | | statcoulomb | statC esu Fr franklin Franklin
statV := 1e-6 V $c | | | | statV statvolt
debye := 1e-21 C m $c-1 | | Debye* | | debye* Debye
Jy := 1e-26 W m-2 s | | Jy* | | jansky Jansky janskys
Ci := 3.7e10 s-1 | Ci* | | Ci curie* | curies Curie
R := 2.58e-4 C kg-1 | R* | | roentgen* R | Roentgen röntgen
RAD := 0.01 Gy | RAD* | | rd | rads
REM := 0.01 Sv | REM* | | rem* |
rayleigh := 7.957747154594767e8 m-2 s-1 #photon | | R* | | rayleigh Rayleigh
sb := 1e4 cd m-2 | sb* | | stilb |
Lmb := 1e4 cd m-2 pi^-1 | Lmb* | | lambert |
ph := 1e4 cd m-2 | ph* | | phot ph |
photon := 1 #photon | | photon ph | photons | photons phot
electron := 1 #electron | | electron | | electrons
baryon := 1 #baryon | | | | baryon baryons
nucleon := 1 #nucleon | | | | nucleon nucleons nuc
atom := 1 #atom | | | | atom atoms at
ion := 1 #ion | | | | ion ions
molecule := 1 #molecule | | | molecule | molecules molec
particle := 1 #particle | | | | particle particles part
neutron := 1 #neutron | | | | neutron neutrons
proton := 1 #proton | | | | proton protons
nucleus := 1 #nucleus | | | | nucleus nuclei
fission := 1 #fission | | | | fission fissions
sourceparticle := 1 #source | | | | source src sourceparticle source_particle
cell := 1 #cell | | | | cell cells zone
count := 1 #count | | count ct | | counts #
pixel := 1 #pixel | | pix pixel | | pixels
voxel := 1 #voxel | | voxel vox | |
beam := 1 #beam | | beam* | |
bin := 1 #bin | | bin* | |
chan := 1 #chan | | chan* | |
adu := 1 #adu | | adu | | ADU
sun := 1 !Sun | | Sun | |
bit := 1 !bit | bit* | bit* b* | bit* | bits
byte := 8 !bit | By* | byte* B* | byte* | bytes
Bd := 1 s-1 | Bd* | | Bd baud bps |
bitlog := 1 | bit_s | | |
osm := 1 mol | osm* | | osmole* |
eq := 1 mol | eq* | | eq equivalent |
molar := 1000 mol m-3 | | | | M* molar
kayser := 100 m-1 | Ky* | | kayser |
diop := 1 m-1 | [diop] | | | diopter
Cel := 1 K zero=273.15 | Cel* | | degC celsius degree_C degrees_C deg_C degreeC degree_c degc °C degree_celsius degrees_celsius degrees_Celsius degree_Celsius Celsius | oC centigrade degsC
degF := 5/9 K zero=45967/180 | [degF] | | degF fahrenheit degree_F degrees_F deg_F degree_f degf °F degree_fahrenheit degrees_fahrenheit degrees_Fahrenheit Fahrenheit | oF
degR := 5/9 K | [degR] | | degR degree_R degrees_R deg_R rankine °R | Rankine
degRe := 5/4 K zero=273.15 | [degRe] | | |
dex := 1 log10 | | dex* | |
mag := 1 log10 steps=-5/2 | | mag* | | magnitude magnitudes mags
Np := 1 ln | Np* | | Np neper |
B := 1 log10 | B* | | |
dB := 1 log10 steps=10 | | dB | dB decibel | db
BSPL := 2e-5 Pa log10 steps=2 | B[SPL]* | | |
BV := 1 V log10 steps=2 | B[V]* | | |
BmV := 1e-3 V log10 steps=2 | B[mV]* | | |
BuV := 1e-6 V log10 steps=2 | B[uV]* | | |
BnV := 1e-8 V log10 steps=2 | B[10.nV]* | | |
BW := 1 W log10 | B[W]* | | |
BkW := 1000 W log10 | B[kW]* | | |
pH := 1 mol m-3 log10 steps=-1 | [pH] | | |
pru := 133322000 Pa s m-3 | [PRU] | | |
wood := 1333220 Pa s m-3 | [wood'U] | | |
c := 1 $c m s-1 | [c]* | c | c speed_of_light |
hplanck := 1 $h J s | [h]* | | |
kboltz := 1 $k J K-1 | [k]* | | | k_B kB k_b kb_boltz k_Boltzmann
eps := 8.854187817e-12 C2 N-1 m-2 | [eps_0]* | | |
munought := 4e-7 N A-2 pi^ | [mu_0]* | | |
echarge := 1 $e C | [e]* | | |
Gnewton := 1 $G m3 kg-1 s-2 | [G]* | | |
mesh := 1 | [mesh_i] | | |
Ch := 1/3000 m pi^-1 | [Ch] | | |
drp := 5e-8 m3 | [drp] | | |
HPF := 1 | [hp_X] [hp_C] [hp_M] [hp_Q] [kp_X] [kp_C] [kp_M] [kp_Q] | | |
HNSF := 1 !HnsfU | [hnsf'U] | | |
MET := 5.833333333333333e-8 m3 kg-1 s-1 | [MET] | | |
PNTP := 1 | [p'diop] %[slope] | | |
HPX := 1 | [hp'_X] [hp'_C] [hp'_M] [hp'_Q] | | |
arbU := 1 !arbU | [arb'U] | | |
USP := 1 !USP | [USP'U] | | |
GPL := 1 !GPL | [GPL'U] | | |
MPL := 1 !MPL | [MPL'U] | | |
APL := 1 !APL | [APL'U] | | |
beth := 1 !beth | [beth'U] | | |
antiXa := 1 !antiXa | [anti'Xa'U] | | |
todd := 1 !todd | [todd'U] | | |
dye := 1 !dye | [dye'U] | | |
smgy := 1 !smgy | [smgy'U] | | |
bdsk := 1 !bdsk | [bdsk'U] | | |
ka := 1 !ka | [ka'U] | | |
knk := 1 !knk | [knk'U] | | |
mclg := 1 !mclg | [mclg'U] | | |
tb := 1 !tb | [tb'U] | | |
CCID := 1 !CCID | [CCID_50] | | |
TCID := 1 !TCID | [TCID_50] | | |
EID := 1 !EID | [EID_50] | | |
PFU := 1 !PFU | [PFU] | | |
FFU := 1 !FFU | [FFU] | | |
CFU := 1 !CFU | [CFU] | | |
IR := 1 !IR | [IR]* | | |
BAU := 1 !BAU | [BAU] | | |
AU := 1 !AU | [AU] | | |
Ambt := 1 !Amb | [Amb'a'1'U] | | |
PNU := 1 !PNU | [PNU] | | |
Lf := 1 !Lf | [Lf] | | |
Dunit := 1 !D | [D'ag'U] | | |
FEU := 1 !FEU | [FEU] | | |
ELU := 1 !ELU | [ELU] | | |
EU := 1 !EU | [EU] | | |
iU := 1 !iU | [iU]* [IU]* | | IU |
kU := 1/60000000 mol s-1 | U* | | |
svedberg := 1e-13 s | [S] | | |
`;

/**
 * Spellings in comments that mean one thing to one trade and another to the next: the readings, likeliest first, each as
 * a name of the table (with a prefix before `:`), or `?` and words for what is no unit.
 * @source tables of UCUM, VOUnits 1.1 and UDUNITS-2 where they differ; the rest is common practice
 */
export const AMBIGUOUS: Readonly<Record<string, readonly string[]>> = {
  a: ['julianyear', 'ar'],
  yr: ['julianyear', 'udyear', 'commonyear'],
  year: ['julianyear', 'udyear', 'gregorianyear', 'commonyear'],
  years: ['julianyear', 'udyear', 'gregorianyear', 'commonyear'],
  yrs: ['julianyear', 'udyear', 'commonyear'],
  kyr: ['k:julianyear', 'k:udyear'],
  kyrs: ['k:julianyear', 'k:udyear'],
  Myr: ['M:julianyear', 'M:udyear'],
  Gyr: ['G:julianyear', 'G:udyear'],
  month: ['julianmonth', 'udmonth', 'gregorianmonth'],
  months: ['julianmonth', 'udmonth', 'gregorianmonth'],
  mo: ['julianmonth', 'udmonth', 'gregorianmonth'],
  b: ['barn', 'bit'],
  mb: ['m:bar', 'm:barn'],
  Mb: ['M:bar', 'M:barn', 'M:bit'],
  kb: ['k:bar', 'k:barn', 'kboltz', 'k:byte'],
  t: ['t', '?time in code units'],
  cal: ['cal', 'calIT'],
  calorie: ['cal', 'calIT'],
  calories: ['cal', 'calIT'],
  ton: ['t', 'ston', 'lton', 'TNT'],
  tons: ['t', 'ston', 'lton', 'TNT'],
  R: ['R', 'rayleigh', 'gasconstant', 'degR'],
  P: ['P', '?the prefix peta'],
  k: ['kboltz', '?the prefix kilo', 'K'],
  kt: ['k:t', 'kn', 'ktTNT'],
  Mt: ['M:t', 'MtTNT'],
  pt: ['pt', 'p:t'],
  ph: ['ph', 'photon'],
  da: ['d', 'd:julianyear', 'd:ar'],
  M: ['molar', 'Msun', '?the prefix mega'],
  F: ['F', 'degF'],
  C: ['C', 'Cel'],
  Gal: ['Gal', 'gal'],
  gal: ['gal', 'Gal'],
  Eh: ['hartree', 'E:h'],
  A: ['A', 'Ao'],
  rad: ['rad', 'RAD'],
  D: ['debye', 'd'],
  B: ['B', 'byte', 'G'],
  'deg C': ['Cel', 'degcoulomb'],
  'deg F': ['degF', 'degfarad'],
  'deg R': ['degR', 'degroentgen'],
  mev: ['M:eV', 'm:eV'],
  Sv: ['Sv', 'Sverdrup'],
  hp: ['HP', 'metrichp'],
  Mo: ['Msun', '?megaoctet'],
  w: ['W'],
  j: ['J'],
  hz: ['Hz'],
  pa: ['Pa'],
  hpa: ['h:Pa'],
  kev: ['k:eV'],
  gev: ['G:eV'],
  ev: ['eV'],
  gauss: ['G'],
  tesla: ['T'],
  ang: ['Ao'],
};

/** Units that only readings name. */
export const READING_UNITS = `
gasconstant := 1 $k $N_A J K-1 mol-1
metrichp := 735.49875 W
degcoulomb := 1/180 C pi^
degfarad := 1/180 F pi^
degroentgen := 1/180 R pi^
`;

/** Expressions of several words that a comment may hold, as the one name they stand for. Compared in lower case. */
export const PHRASES: Readonly<Record<string, string>> = {
  'kt tnt': 'kt_TNT',
  'mt tnt': 'Mt_TNT',
  'tons of tnt': 'ton_of_TNT',
  'cal (it)': 'cal_IT',
  'kcal (it)': 'kcal_IT',
  'cal (th)': 'cal_th',
  'kcal (th)': 'kcal_th',
  'deg c': 'deg C',
  'deg. c': 'deg C',
  'deg f': 'deg F',
  'deg. f': 'deg F',
  'deg r': 'deg R',
  'degrees c': 'degC',
  'degree c': 'degC',
  'degrees f': 'degF',
  'degree f': 'degF',
  'c (temperature)': 'degC',
  'f (temperature)': 'degF',
  'month (julian)': 'julianmonth',
  'year (julian)': 'julianyear',
  'julian year': 'julianyear',
  'julian years': 'julianyear',
  'year (gnu units)': 'gnuyear',
  'year (udunits)': 'udyear',
  'tropical year (ucum)': 'tropicalyear',
  'tropical year': 'udyear',
  'sidereal year (udunits)': 'siderealyear',
  'sidereal year': 'siderealyear',
  'gregorian year': 'gregorianyear',
  'nautical mile': 'nautical_mile',
  'nautical miles': 'nautical_mile',
  'light year': 'light_year',
  'light years': 'light_year',
  'light-year': 'light_year',
  'solar mass': 'solar_mass',
  'solar masses': 'solar_mass',
  'solar radius': 'solar_radius',
  'solar radii': 'solar_radius',
  'solar luminosity': 'solar_luminosity',
  'solar luminosities': 'solar_luminosity',
  'atomic mass unit': 'amu',
  'atomic mass units': 'amu',
  'astronomical unit': 'astronomical_unit',
  'astronomical units': 'astronomical_unit',
  'electron volt': 'electronvolt',
  'electron volts': 'electronvolt',
  'electron-volt': 'electronvolt',
  'degrees celsius': 'degrees_celsius',
  'degree celsius': 'degrees_celsius',
  'deg celsius': 'degrees_celsius',
  'degrees fahrenheit': 'degrees_fahrenheit',
  'degree fahrenheit': 'degrees_fahrenheit',
  'degrees kelvin': 'kelvin',
  'degree kelvin': 'kelvin',
  'deg kelvin': 'kelvin',
  'degrees k': 'kelvin',
  'degree k': 'kelvin',
  'deg k': 'kelvin',
  'deg. k': 'kelvin',
  'degrees north': 'degrees_north',
  'degrees east': 'degrees_east',
  'pound force': 'pound_force',
  'per cent': 'percent',
  'parts per million': 'ppm',
  'parts per billion': 'ppb',
  'no unit': 'unitless',
  'no units': 'unitless',
  'non-dimensional': 'nondim',
  'non dimensional': 'nondim',
  'non-dim': 'nondim',
  'nondimensional units': 'nondim',
  'mass fraction': 'fraction',
  'volume fraction': 'fraction',
  'mole fraction': 'fraction',
};
