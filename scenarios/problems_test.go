package scenarios

import (
	"strings"
	"testing"
)

// base is a valid case; each test below spoils one thing of it.
const base = `title = "base"
[run]
span = "100 Myr"
record = "1 Myr"
[central]
name = "Ombra"
mass = "1.6e27 kg"
radius = "66000 km"
J2 = 0.012
tide = { law = "constant-q", k2_over_Q = 1.3e-5 }
[orbiter.Cinder]
mass = "9.1e22 kg"
radius = "1790 km"
period = "1.9 d"
[orbiter.Cinder.interior]
model = "rock"
temperature = "1650 K"
surface_temperature = "110 K"
heat_capacity = "1200 J/kg/K"
conductivity = "4 W/m/K"
expansivity = "3e-5 /K"
solidus = "1600 K"
liquidus = "2000 K"
latent_heat = "4e5 J/kg"
rheology = { model = "andrade", rigidity = "60 GPa" }
viscosity = { law = "arrhenius", reference = "1e18 Pa s", at = "1600 K", activation_energy = "300 kJ/mol" }
convection = { law = "stagnant-lid" }
[orbiter.Brine]
mass = "4.4e22 kg"
radius = "1520 km"
[orbiter.Tern]
mass = "1e21 kg"
radius = "500 km"
period = "12 d"
eccentricity = 0.01
[chain.inner]
members = ["Cinder", "Brine"]
ratios = ["2:1"]
offset = "-0.70 deg/day"
[[change]]
at = "50 Myr"
set = { central.tide.k2_over_Q = 4e-5 }
[[observed]]
body = "Cinder"
column = "surface_loss_W"
value = "1e14 W"
error = "0.1e14 W"
`

func TestBaseIsValid(t *testing.T) {
	if _, err := Read("base.toml", []byte(base)); err != nil {
		t.Fatal(err)
	}
}

// problemCases: replace old by new in base, and expect these problems, word for
// word. The texts are ours: common practice, no source.
var problemCases = []struct{ name, old, new, want string }{
	{"bare number", `radius = "1790 km"`, `radius = 1790`, `base.toml:13: orbiter.Cinder.radius: needs a unit
  hint: write radius = "1790 km"`},
	{"no unit", `radius = "1790 km"`, `radius = "1790"`, `base.toml:13: orbiter.Cinder.radius: needs a unit
  hint: write "1790 km"`},
	{"unquoted quantity", `radius = "1790 km"`, `radius = 1790 km`, `base.toml:13: radius: is not TOML: expected newline but got U+006B 'k'
  hint: a value with a unit stands in quotes: radius = "1790 km"`},
	{"wrong dimension", `radius = "1790 km"`, `radius = "1790 kg"`, `base.toml:13: orbiter.Cinder.radius: "1790 kg" is a mass, but a length is needed
  hint: write it in km or another unit of that dimension`},
	{"slash divides one factor", `conductivity = "4 W/m/K"`, `conductivity = "4 W/m K"`, `base.toml:20: orbiter.Cinder.interior.conductivity: "4 W/m K" is kg m s^-3 K, but kg m s^-3 K^-1 is needed
  hint: write it in W/m/K or another unit of that dimension; "/" divides by the next factor only`},
	{"unknown unit", `radius = "1790 km"`, `radius = "1790 kms"`, `base.toml:13: orbiter.Cinder.radius: unknown unit "kms"
  hint: did you mean "km"?`},
	{"celsius", `temperature = "1650 K"`, `temperature = "1377 °C"`, `base.toml:17: orbiter.Cinder.interior.temperature: unknown unit "°C"
  hint: temperatures are in K: add 273.15`},
	{"not a number", `radius = "1790 km"`, `radius = "wide"`, `base.toml:13: orbiter.Cinder.radius: "wide" does not begin with a number
  hint: write a number and a unit, as in "1 km"`},
	{"nan", `radius = "1790 km"`, `radius = "nan km"`, `base.toml:13: orbiter.Cinder.radius: "nan km" is not finite
  hint: give a finite number`},
	{"nan number", `J2 = 0.012`, `J2 = nan`, `base.toml:9: central.J2: nan is not finite
  hint: give a finite number`},
	{"infinite number", `J2 = 0.012`, `J2 = inf`, `base.toml:9: central.J2: inf is not finite
  hint: give a finite number`},
	{"overflow", `radius = "1790 km"`, `radius = "1e307 km"`, `base.toml:13: orbiter.Cinder.radius: "1e307 km" is beyond the numbers a double holds
  hint: check the power of ten`},
	{"negative mass", `mass = "9.1e22 kg"`, `mass = "-9.1e22 kg"`, `base.toml:12: orbiter.Cinder.mass: "-9.1e22 kg" is out of range
  hint: it must be above 0 kg`},
	{"times ten to the", `mass = "9.1e22 kg"`, `mass = "9.1×10^22 kg"`, `base.toml:12: orbiter.Cinder.mass: "9.1×10^22 kg" is not written as a number and a unit
  hint: powers of ten are written 1.6e27, the decimal mark is a point, and digits are not grouped`},
	{"central mass in itself", `mass = "1.6e27 kg"`, `mass = "1 M_central"`, `base.toml:7: central.mass: M_central is not known here
  hint: it needs a central body whose mass and radius are given in other units`},
	{"string for a number", `J2 = 0.012`, `J2 = "0.012"`, `base.toml:9: central.J2: is a string, not a plain number
  hint: write J2 = NUMBER, without quotes or unit`},
	{"number out of range", `J2 = 0.012`, `J2 = 12`, `base.toml:9: central.J2: 12 is out of range
  hint: it must be at least 0 and at most 0.5`},
	{"mistyped key", `radius = "1790 km"`, `raduis = "1790 km"`, `base.toml:13: orbiter.Cinder.raduis: is not a known key
  hint: did you mean radius?`},
	{"key of the table around", `model = "rock"`, "model = \"rock\"\nperiod = \"2 d\"", `base.toml:17: orbiter.Cinder.interior.period: is not a known key
  hint: period is a key of [orbiter.Cinder]; move it there`},
	{"key no law has", `rigidity = "60 GPa" }`, `rigidity = "60 GPa", velocity = "1 m/s" }`, `base.toml:25: orbiter.Cinder.interior.rheology.velocity: is not a known key
  hint: known here: model, rigidity, melt_exponent, alpha, zeta`},
	{"key of another law", `{ model = "andrade", rigidity = "60 GPa" }`, `{ model = "maxwell", rigidity = "60 GPa", alpha = 0.3 }`, `base.toml:25: orbiter.Cinder.interior.rheology.alpha: is not a known key
  hint: alpha is a key of model = "andrade"`},
	{"key of a later version", `J2 = 0.012`, "J2 = 0.012\nspin = \"1 d\"", `base.toml:10: central.spin: is not available in this version
  hint: remove it`},
	{"sweep", "[run]", "[sweep]\ndesign = \"grid\"\n[run]", `base.toml:2: sweep: is not available in this version
  hint: remove it`},
	{"unknown table", "[run]", "[moon]\n[run]", `base.toml:2: moon: is not a known key
  hint: known here: title, format, run, central, orbiter, chain, change, observed`},
	{"missing key", `mass = "9.1e22 kg"`, ``, `base.toml:11: orbiter.Cinder.mass: is missing
  hint: add mass = "NUMBER kg": mass`},
	{"unknown law", `law = "stagnant-lid"`, `law = "stagnant-lib"`, `base.toml:27: orbiter.Cinder.interior.convection.law: there is no law of convection "stagnant-lib"
  hint: did you mean "stagnant-lid"?`},
	{"no law", `{ law = "stagnant-lid" }`, `{ }`, `base.toml:27: orbiter.Cinder.interior.convection: names no law
  hint: add law = "stagnant-lid", or another of stagnant-lid, mobile-lid`},
	{"law as a string", `{ law = "stagnant-lid" }`, `"stagnant-lid"`, `base.toml:27: orbiter.Cinder.interior.convection: is a string, not a table
  hint: write convection = { law = "stagnant-lid", … }`},
	{"solidus above liquidus", `solidus = "1600 K"`, `solidus = "2600 K"`, `base.toml:22: orbiter.Cinder.interior.solidus: solidus 2600 K is not below the liquidus 2000 K
  hint: give the temperature at which melting begins, then the one at which it is complete`},
	{"unknown regime", `span = "100 Myr"`, "span = \"100 Myr\"\nregime = \"fast\"", `base.toml:4: run.regime: "fast" is not one of its choices
  hint: choose one of adiabatic, resolved, auto`},
	{"method without resolving", `span = "100 Myr"`, "span = \"100 Myr\"\nmethod = \"dop853\"", `base.toml:4: run.method: "dop853" is no integrator of the adiabatic regime
  hint: remove it, or write radau or rosenbrock`},
	{"tolerance", `span = "100 Myr"`, "span = \"100 Myr\"\ntolerance = 0.1", `base.toml:4: run.tolerance: 0.1 is out of range
  hint: it must be at least 1e-12 and at most 0.001`},
	{"steps", `span = "100 Myr"`, "span = \"100 Myr\"\nmax_steps = 1.5", `base.toml:4: run.max_steps: 1.5 is not a whole number
  hint: write max_steps = NUMBER, without quotes or unit`},
	{"too many rows", `record = "1 Myr"`, `record = "1 d"`, `base.toml:4: run.record: makes 3.65e+10 rows of each body, more than 1e+06
  hint: write record = "0.2 Myr"`},
	{"no cadence", `record = "1 Myr"`, `record = {}`, `base.toml:4: run.record: says neither every nor change
  hint: write record = "1 Myr" or record = { change = 1e-3 }`},
	{"zero cadence", `record = "1 Myr"`, `record = "0 Myr"`, `base.toml:4: run.record: "0 Myr" is out of range
  hint: a cadence is above 0`},
	{"endless decimals", `record = "1 Myr"`, `record = "1e19 s s/d"`, `base.toml:4: run.record: "1e19 s s/d" is no finite decimal number of seconds
  hint: write it in Myr, kyr, yr, d or s`},
	{"judge unknown", `span = "100 Myr"`, "span = \"100 Myr\"\njudge = \"cinder\"", `base.toml:4: run.judge: there is no orbiter "cinder"
  hint: did you mean "Cinder"?`},
	{"judge without interior", `span = "100 Myr"`, "span = \"100 Myr\"\njudge = \"Brine\"", `base.toml:4: run.judge: Brine has no interior to judge
  hint: name an orbiter with an interior`},
	{"stop names no body", `span = "100 Myr"`, "span = \"100 Myr\"\nstop = [{ event = \"roche-limit\", body = \"Cyndr\" }]", `base.toml:4: run.stop[1].body: there is no orbiter "Cyndr"
  hint: choose one of Cinder, Brine, Tern`},
	{"format", `title = "base"`, "title = \"base\"\nformat = 2", `base.toml:2: format: 2 is out of range
  hint: it must be 1`},
	{"name with a dot", `[orbiter.Tern]`, `[orbiter."Tern.b"]`, `base.toml:31: orbiter."Tern.b": "Tern.b" is not a name
  hint: names have 1 to 64 letters, digits, - and _`},
	{"names differ by case", `[orbiter.Tern]`, `[orbiter.brine]`, `base.toml:31: orbiter.brine: the name "brine" is taken by orbiter.Brine
  hint: names of bodies differ by more than upper and lower case`},
	{"orbiter named as the planet", `[orbiter.Tern]`, `[orbiter.ombra]`, `base.toml:31: orbiter.ombra: the name "ombra" is taken by central.name
  hint: names of bodies differ by more than upper and lower case`},
	{"list of orbiters", `[orbiter.Cinder]`, `[[orbiter]]`, `base.toml:11: orbiter: is a list, not a table
  hint: write [orbiter.NAME], a table for each`},
	{"orbiter without name", "[orbiter.Cinder]\n", "[orbiter]\nmass = \"1 kg\"\n[orbiter.Cinder]\n", `base.toml:12: orbiter.mass: is a string, not an orbiter
  hint: mass stands in the table of one orbiter: [orbiter.NAME]`},
	{"eccentricity of 1", `eccentricity = 0.01`, `eccentricity = 1`, `base.toml:35: orbiter.Tern.eccentricity: 1 is out of range
  hint: it must be at least 0 and below 1`},
	{"eccentricity beyond tides", `eccentricity = 0.01`, `eccentricity = 0.96`, `base.toml:35: orbiter.Tern.eccentricity: 0.96 is too high for tides
  hint: it must be below 0.95 where a tide acts`},
	{"period and axis", `period = "12 d"`, "period = \"12 d\"\nsemimajor_axis = \"1e6 km\"", `base.toml:35: orbiter.Tern.semimajor_axis: period and semimajor_axis are both given
  hint: remove one: each fixes the other`},
	{"no orbit", `period = "12 d"`, ``, `base.toml:31: orbiter.Tern.period: is missing
  hint: add period = "NUMBER d" or semimajor_axis = "NUMBER km", or make it a member of a chain`},
	{"chain without inner orbit", `period = "1.9 d"`, ``, `base.toml:11: orbiter.Cinder.period: is missing
  hint: add period = "NUMBER d" or semimajor_axis = "NUMBER km": Cinder is the innermost of chain inner`},
	{"period of an outer member", `radius = "1520 km"`, "radius = \"1520 km\"\nperiod = \"3.8 d\"", `base.toml:31: orbiter.Brine.period: is already fixed by chain inner
  hint: remove it: ratios and offset place every member but the innermost`},
	{"eccentricity of a member", `radius = "1520 km"`, "radius = \"1520 km\"\neccentricity = 0.01", `base.toml:31: orbiter.Brine.eccentricity: is already fixed by chain inner
  hint: remove it: a locked chain starts with its forced eccentricities`},
	{"unknown member", `members = ["Cinder", "Brine"]`, `members = ["Cinder", "Brin"]`, `base.toml:37: chain.inner.members[2]: there is no orbiter "Brin"
  hint: did you mean "Brine"?`},
	{"member twice", `members = ["Cinder", "Brine"]`, `members = ["Cinder", "Cinder"]`, `base.toml:37: chain.inner.members[2]: Cinder is named twice`},
	{"one member", `members = ["Cinder", "Brine"]`, `members = ["Cinder"]`, `base.toml:37: chain.inner.members: has 1, not 2 to 10 orbiters
  hint: an orbiter in no resonance is in no chain`},
	{"member of two chains", "[[change]]", "[chain.outer]\nmembers = [\"Brine\", \"Tern\"]\nratios = [\"3:1\"]\noffset = \"-1 deg/day\"\n[[change]]", `base.toml:34: orbiter.Tern.period: is already fixed by chain outer
  hint: remove it: ratios and offset place every member but the innermost
base.toml:35: orbiter.Tern.eccentricity: is already fixed by chain outer
  hint: remove it: a locked chain starts with its forced eccentricities
base.toml:41: chain.outer.members: Brine is already a member of chain inner
  hint: join the two chains, or leave it out of one
base.toml:42: chain.outer.ratios[1]: "3:1" is not first order
  hint: only (j+1):j resonances can lock a chain: 2:1, 3:2, 4:3, …`},
	{"ratio count", `ratios = ["2:1"]`, `ratios = ["2:1", "2:1"]`, `base.toml:38: chain.inner.ratios: gives 2 ratios for 2 members
  hint: give 1, one for each pair of neighbours`},
	{"second order", `ratios = ["2:1"]`, `ratios = ["3:1"]`, `base.toml:38: chain.inner.ratios[1]: "3:1" is not first order
  hint: only (j+1):j resonances can lock a chain: 2:1, 3:2, 4:3, …`},
	{"not lowest terms", `ratios = ["2:1"]`, `ratios = ["4:2"]`, `base.toml:38: chain.inner.ratios[1]: "4:2" is not in lowest terms
  hint: did you mean "2:1"?`},
	{"outer first", `ratios = ["2:1"]`, `ratios = ["1:2"]`, `base.toml:38: chain.inner.ratios[1]: "1:2" has the outer orbit first
  hint: write "2:1", the inner orbit's revolutions first`},
	{"no ratio", `ratios = ["2:1"]`, `ratios = [2]`, `base.toml:38: chain.inner.ratios[1]: is a whole number, not a ratio
  hint: write "2:1", the inner orbit's revolutions first`},
	{"zero offset", `offset = "-0.70 deg/day"`, `offset = "0 deg/day"`, `base.toml:39: chain.inner.offset: is 0
  hint: at exact commensurability the forced eccentricities diverge; give a negative offset, such as "-0.5 deg/day"`},
	{"no offset", "offset = \"-0.70 deg/day\"\n", ``, `base.toml:36: chain.inner.offset: is missing
  hint: add offset = "NUMBER deg/day": (j+1) n_outer − j n_inner, common to a locked chain, which must give it, not 0; it fixes the outer orbits and the forced eccentricities`},
	{"misspelt offset", `offset =`, `ofset =`, `base.toml:39: chain.inner.ofset: is not a known key
  hint: did you mean offset?`},
	{"free and adiabatic", "[chain.inner]\n", "[chain.inner]\nstate = \"free\"\n", `base.toml:11: orbiter.Cinder.eccentricity: is missing
  hint: add eccentricity = NUMBER: chain inner is free
base.toml:11: orbiter.Cinder.pericentre: is missing
  hint: add pericentre = "NUMBER deg": chain inner is free
base.toml:11: orbiter.Cinder.mean_longitude: is missing
  hint: add mean_longitude = "NUMBER deg": chain inner is free
base.toml:28: orbiter.Brine.period: is missing
  hint: add period = "NUMBER d" or semimajor_axis = "NUMBER km": chain inner is free
base.toml:28: orbiter.Brine.eccentricity: is missing
  hint: add eccentricity = NUMBER: chain inner is free
base.toml:28: orbiter.Brine.pericentre: is missing
  hint: add pericentre = "NUMBER deg": chain inner is free
base.toml:28: orbiter.Brine.mean_longitude: is missing
  hint: add mean_longitude = "NUMBER deg": chain inner is free
base.toml:37: chain.inner.state: is free, and the adiabatic regime follows no angle that may circulate
  hint: write regime = "resolved", or state = "locked" with an offset
base.toml:40: chain.inner.offset: is already fixed by the elements of the members
  hint: remove it, or write state = "locked"`},
	{"phase of a locked member", `radius = "1520 km"`, "radius = \"1520 km\"\npericentre = \"10 deg\"", `base.toml:31: orbiter.Brine.pericentre: is already fixed by chain inner
  hint: remove it: a locked chain starts on its libration centre, which has no phase`},
	{"phase of a lone orbiter", `period = "12 d"`, "period = \"12 d\"\nmean_longitude = \"10 deg\"", `base.toml:35: orbiter.Tern.mean_longitude: has no effect outside a chain
  hint: remove it: without a resonance the phases do not matter`},
	{"chain out of order", `offset = "-0.70 deg/day"`, `offset = "500 deg/day"`, `base.toml:37: chain.inner.members: Cinder and Brine are not neighbours
  hint: list members from the innermost outward, without another orbit between them`},
	{"offset without angle", `offset = "-0.70 deg/day"`, `offset = "-0.70 /day"`, `base.toml:39: chain.inner.offset: "-0.70 /day" is a rate, but an angular rate is needed
  hint: write it in deg/day or another unit of that dimension`},
	{"wide libration", `ratios = ["2:1"]`, "ratios = [\"2:1\"]\nlibration = \"120 deg\"", `base.toml:39: chain.inner.libration: "120 deg" is out of range
  hint: it must be at least 0 deg and below 90 deg`},
	{"not neighbours", `period = "12 d"`, `period = "2.7 d"`, `base.toml:37: chain.inner.members: Cinder and Brine are not neighbours
  hint: list members from the innermost outward, without another orbit between them`},
	{"crossing", `eccentricity = 0.01`, `eccentricity = 0.7`, `base.toml:34: orbiter.Tern.period: its orbit crosses that of Brine: pericentre 428193 km, apocentre of Brine 667046 km
  hint: move the two apart or lower an eccentricity`},
	{"inside Roche", `period = "1.9 d"`, `period = "0.25 d"`, `base.toml:14: orbiter.Cinder.period: its pericentre, 108698 km, lies inside the Roche limit, 113571 km
  hint: check the period, and masses and radii of both bodies`},
	{"inside planet", `period = "1.9 d"`, `period = "0.1 d"`, `base.toml:14: orbiter.Cinder.period: its pericentre, 60283 km, lies inside the central body, 66000 km
  hint: check the period, and the mass and radius of the central body
base.toml:28: orbiter.Brine: its pericentre, 93986.2 km, lies inside the Roche limit, 122873 km
  hint: check the period, and masses and radii of both bodies`},
	{"heavier than the planet", `mass = "1e21 kg"`, `mass = "1e28 kg"`, `base.toml:32: orbiter.Tern.mass: 1e28 kg is not below that of the central body, 1.6e27 kg
  hint: check both masses`},
	{"change of a start value", `set = { central.tide.k2_over_Q = 4e-5 }`, `set = { orbiter.Tern.period = "13 d" }`, `base.toml:42: change[1].set.orbiter.Tern.period: cannot be changed during the history
  hint: a change may set keys of central.tide and of interiors, but not the model itself`},
	{"change of the model", `set = { central.tide.k2_over_Q = 4e-5 }`, `set = { orbiter.Cinder.interior.model = "fixed" }`, `base.toml:42: change[1].set.orbiter.Cinder.interior.model: cannot be changed during the history
  hint: a change may set keys of central.tide and of interiors, but not the model itself`},
	{"change of an unknown key", `set = { central.tide.k2_over_Q = 4e-5 }`, `set = { central.tide.k2_over_q = 4e-5 }`, `base.toml:42: change[1].set.central.tide.k2_over_q: is not a known key
  hint: did you mean k2_over_Q?`},
	{"change out of range", `set = { central.tide.k2_over_Q = 4e-5 }`, `set = { central.tide.k2_over_Q = -4e-5 }`, `base.toml:42: change[1].set.central.tide.k2_over_Q: -4e-5 is out of range
  hint: it must be at least 0`},
	{"change of an unknown orbiter", `set = { central.tide.k2_over_Q = 4e-5 }`, `set = { orbiter.Cindr.interior.solidus = "1500 K" }`, `base.toml:42: change[1].set.orbiter.Cindr.interior.solidus: there is no orbiter "Cindr"
  hint: did you mean "Cinder"?`},
	{"change that breaks another key", `set = { central.tide.k2_over_Q = 4e-5 }`, `set = { orbiter.Cinder.interior.liquidus = "1500 K" }`, `base.toml:42: change[1].set: leaves orbiter.Cinder.interior.solidus wrong: solidus 1600 K is not below the liquidus 1500 K
  hint: give the temperature at which melting begins, then the one at which it is complete`},
	{"change without time", `at = "50 Myr"`, ``, `base.toml:40: change[1]: has neither at nor when
  hint: add at = "1 Gyr", or when = { event = "NAME" }`},
	{"event that is none", `span = "100 Myr"`, "span = \"100 Myr\"\nstop = [{ event = \"solidus-crosed\" }]", `base.toml:4: run.stop[1].event: "solidus-crosed" is not one of its choices
  hint: did you mean "solidus-crossed"?`},
	{"title with an escape", `title = "base"`, `title = "\u001b[31m"`, `base.toml:1: title: holds a control character
  hint: write it on one line, in visible characters`},
	{"change with both", `at = "50 Myr"`, "at = \"50 Myr\"\nwhen = { event = \"x\" }", `base.toml:42: change[1].when: at and when are both given
  hint: remove one`},
	{"change of nothing", `set = { central.tide.k2_over_Q = 4e-5 }`, `set = {}`, `base.toml:42: change[1].set: holds no paths with values
  hint: write set = { central.tide.k2_over_Q = 4e-5 }`},
	{"single brackets", "[[observed]]", "[observed]", `base.toml:43: observed: is a table, not a list
  hint: write [[observed]] in double brackets`},
	{"observed unit", `value = "1e14 W"`, `value = "1e14 K"`, `base.toml:46: observed[1].value: "1e14 K" is a temperature, but a power is needed
  hint: write it in W or another unit of that dimension`},
	{"observed unit of a pure number", `column = "surface_loss_W"`, `column = "eccentricity"`, `base.toml:46: observed[1].value: is "1e14 W", but the column "eccentricity" has no unit
  hint: write a plain number
base.toml:47: observed[1].error: is "0.1e14 W", but the column "eccentricity" has no unit
  hint: write a plain number`},
	{"observed error", `error = "0.1e14 W"`, `error = 0`, `base.toml:47: observed[1].error: 0 is out of range
  hint: it must be above 0`},
	{"observed column", `column = "surface_loss_W"`, `column = "surface loss"`, `base.toml:45: observed[1].column: "surface loss" is not one of its choices
  hint: did you mean "surface_loss_W"?`},
	{"key twice", `J2 = 0.012`, "J2 = 0.012\nJ2 = 0.013", `base.toml:10: central.J2: is given twice, first in line 9
  hint: keep one of the two`},
	{"table twice", "[[change]]", "[central]\n[[change]]", `base.toml:40: central: is given twice, first in line 5
  hint: join the two, or rename one`},
	{"syntax", `J2 = 0.012`, `J2 = `, `base.toml:9: is not TOML: unexpected character U+000A at start of value`},
}

func TestProblems(t *testing.T) {
	for _, c := range problemCases {
		t.Run(c.name, func(t *testing.T) {
			if strings.Count(base, c.old) != 1 {
				t.Fatalf("base has %q %d times, want once", c.old, strings.Count(base, c.old))
			}
			_, err := Read("base.toml", []byte(strings.Replace(base, c.old, c.new, 1)))
			if err == nil {
				t.Fatal("was accepted")
			}
			if err.Error() != c.want {
				t.Errorf("got\n%s\nwant\n%s", err, c.want)
			}
		})
	}
}
