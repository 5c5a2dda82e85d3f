//! Every table and key of the case file, one line a key. Reader, schema and reference page know
//! keys from here; what they mean in SI is the reader's business.

use super::keys::Kind::{Count, Either, List, Number, Pair, Quantity, Table as Inner, Text, Word};
use super::keys::Need::{Default, Required, Without};
use super::keys::{Kind, Rule, Table, key};
use super::units::Dimension;

/// Names of the sides.
pub(super) const SIDE_NAMES: [&str; 4] = ["left", "right", "bottom", "top"];
/// Where a limit may hold.
pub(super) const LIMIT_PLACES: [&str; 2] = ["part", "junction"];
/// Conditions of a side that need no number.
pub(super) const SIDE_WORDS: [&str; 3] = ["adiabatic", "symmetry", "open"];

const LENGTHS: [Kind; 2] = [Quantity(Dimension::Length, ""), Quantity(Dimension::Length, "")];
const SIDE_KIND: Kind = Either(&[Word(&SIDE_WORDS), Inner(&SIDE)]);

/// All examples together: a case.
pub(super) fn example() -> String {
    let inner = TOP.keys.iter().filter_map(|key| key.kind.table()).map(|table| table.example);
    std::iter::once(TOP.example).chain(inner).collect()
}

/// The whole file.
#[rustfmt::skip]
pub(super) const TOP: Table = Table {
    header: "title",
    what: "the case file",
    says: "The first line of a file may give the case a title.",
    keys: &[
        key("title", Text, Without("the file's name"), "what reports and pictures are headed with"),
        key("section", Inner(&SECTION), Required, "the computed plane"),
        key("ambient", Inner(&AMBIENT), Required, "the air outside"),
        key("air", Inner(&AIR), Without("dry air"), "the properties of the air"),
        key("material", List(&Inner(&MATERIAL)), Without("the built-in materials"), "materials of your own"),
        key("block", List(&Inner(&BLOCK)), Without("no solid"), "solid rectangles"),
        key("joint", List(&Inner(&JOINT)), Without("perfect contact"), "contact resistances"),
        key("slot", List(&Inner(&SLOT)), Without("no opening"), "openings in the edge of the section"),
        key("fan", List(&Inner(&FAN)), Without("draught alone"), "fans in slots"),
        key("sides", Inner(&SIDES), Without("adiabatic sides"), "what the edge does where no slot is"),
        key("probe", List(&Inner(&PROBE)), Without("none"), "places whose values are reported"),
        key("mesh", Inner(&MESH), Without("chosen from the case"), "how fine the section is divided"),
        key("solve", Inner(&SOLVE), Without("the usual bounds"), "when to stop"),
    ],
    later: &[],
    rules: &[],
    example: "title = \"Charger in a wall box\"\n",
};

#[rustfmt::skip]
pub(super) const SECTION: Table = Table {
    header: "[section]",
    what: "[section]",
    says: "The computed plane. In a planar section x is the width, and watts and flows are for the \
           depth; in an axisymmetric one x is the radius, the left side is the axis, and watts and \
           flows are for the full revolution. y points upwards; (0, 0) is the lower left corner.",
    keys: &[
        key("geometry", Word(&["planar", "axisymmetric"]), Required, "the kind of section"),
        key("width", Quantity(Dimension::Length, "from 0.001 mm to 100 m"), Required, "extent along x; of an axisymmetric section the outer radius"),
        key("height", Quantity(Dimension::Length, "from 0.001 mm to 100 m"), Required, "extent along y"),
        key("depth", Quantity(Dimension::Length, "from 0.001 mm to 100 m"), Without("-"), "length along the third direction"),
        key("tilt", Quantity(Dimension::Angle, ""), Default("\"0 deg\""), "reserved; only \"0 deg\" is possible in this version"),
    ],
    later: &[],
    rules: &[Rule::Needs("geometry", "planar", &["depth"]), Rule::Bars("geometry", "axisymmetric", &["depth"])],
    example: "[section]\ngeometry = \"planar\"\nwidth = \"120 mm\"\nheight = \"300 mm\"\ndepth = \"200 mm\"\n",
};

#[rustfmt::skip]
pub(super) const AMBIENT: Table = Table {
    header: "[ambient]",
    what: "[ambient]",
    says: "The air outside: what enters through slots and open sides, and what films lead to.",
    keys: &[
        key("temperature", Quantity(Dimension::Temperature, "from -90 degC to 300 degC"), Required, "its temperature; take the worst that the housing must bear"),
        key("altitude", Quantity(Dimension::Length, "from -500 m to 11000 m"), Default("\"0 m\""), "height above sea level, from which the pressure follows by the standard atmosphere"),
        key("pressure", Quantity(Dimension::Pressure, "from 1 kPa to 1000 kPa"), Without("from altitude"), "its pressure, instead of an altitude"),
    ],
    later: &[],
    rules: &[Rule::AtMostOne(&["altitude", "pressure"])],
    example: "[ambient]\ntemperature = \"40 degC\"\naltitude = \"500 m\"\n",
};

#[rustfmt::skip]
pub(super) const AIR: Table = Table {
    header: "[air]",
    what: "[air]",
    says: "The properties of the air. The usual choice, dry air at the film temperature of the \
           result, needs no such table.",
    keys: &[
        key("properties", Word(&["film", "given"]), Default("\"film\""), "\"film\": dry air at the film temperature of the result; \"given\": the numbers below, exactly"),
        key("density", Quantity(Dimension::Density, "from 1e-4 kg/m3 to 1e5 kg/m3"), Without("-"), "density"),
        key("viscosity", Quantity(Dimension::Viscosity, "from 1e-8 Pa s to 1000 Pa s"), Without("-"), "dynamic viscosity"),
        key("conductivity", Quantity(Dimension::Conductivity, "from 1e-5 W/(m K) to 1e4 W/(m K)"), Without("-"), "thermal conductivity"),
        key("specific-heat", Quantity(Dimension::SpecificHeat, "from 1 J/(kg K) to 1e6 J/(kg K)"), Without("-"), "specific heat at constant pressure"),
        key("expansion", Quantity(Dimension::Expansion, "from 0 1/K to 1 1/K"), Without("-"), "thermal expansion coefficient"),
        key("reference-temperature", Quantity(Dimension::Temperature, "at most 3000 degC"), Without("ambient"), "temperature at which the given density holds"),
    ],
    later: &[],
    rules: &[
        Rule::Needs("properties", "given", &["density", "viscosity", "conductivity", "specific-heat", "expansion"]),
        Rule::Bars("properties", "film", &["density", "viscosity", "conductivity", "specific-heat", "expansion", "reference-temperature"]),
    ],
    example: "[air]\nproperties = \"given\"\ndensity = \"1.06 kg/m3\"\nviscosity = \"1.95e-5 Pa s\"\n\
              conductivity = \"0.0275 W/(m K)\"\nspecific-heat = \"1007 J/(kg K)\"\nexpansion = \"0.0031 1/K\"\n",
};

#[rustfmt::skip]
pub(super) const MATERIAL: Table = Table {
    header: "[[material]]",
    what: "a material",
    says: "A material of your own. It may have the name of a built-in one, and then replaces it.",
    keys: &[
        key("name", Text, Required, "what blocks call it"),
        key("conductivity", Quantity(Dimension::Conductivity, "from 1e-4 W/(m K) to 1e6 W/(m K)"), Without("-"), "thermal conductivity, the same along x and y"),
        key("conductivity-x", Quantity(Dimension::Conductivity, "from 1e-4 W/(m K) to 1e6 W/(m K)"), Without("-"), "thermal conductivity along x"),
        key("conductivity-y", Quantity(Dimension::Conductivity, "from 1e-4 W/(m K) to 1e6 W/(m K)"), Without("-"), "thermal conductivity along y"),
        key("density", Quantity(Dimension::Density, "from 0.01 kg/m3 to 1e5 kg/m3"), Without("2000 kg/m3"), "density; only what is said of a sway depends on it"),
        key("specific-heat", Quantity(Dimension::SpecificHeat, "from 1 J/(kg K) to 1e6 J/(kg K)"), Without("1000 J/(kg K)"), "specific heat; only what is said of a sway depends on it"),
        key("emissivity", Number(0.0, 1.0, "from 0 to 1"), Without("none"), "emissivity of its surface; one anywhere in the case switches radiation on"),
    ],
    later: &[],
    rules: &[Rule::OneOf(&[&["conductivity"], &["conductivity-x", "conductivity-y"]])],
    example: "[[material]]\nname = \"board, 6 layers\"\nconductivity-x = \"0.35 W/(m K)\"\nconductivity-y = \"32 W/(m K)\"\nemissivity = 0.9\n",
};

#[rustfmt::skip]
pub(super) const BLOCK: Table = Table {
    header: "[[block]]",
    what: "a block",
    says: "A solid rectangle. Air is wherever no block is. Blocks may touch and must not overlap.",
    keys: &[
        key("name", Text, Without("no name"), "a name of its own; a named block without a part is a part by itself"),
        key("part", Text, Without("its name"), "name of the part it belongs to; blocks of one part are judged together"),
        key("material", Text, Required, "name of a built-in material or of one of your own"),
        key("x", Pair(&LENGTHS, "a smaller and a larger length"), Required, "from and to along x"),
        key("y", Pair(&LENGTHS, "a smaller and a larger length"), Required, "from and to along y"),
        key("heat", Quantity(Dimension::Power, "0 W, or from 1e-9 W to 1000 kW in size"), Default("\"0 W\""), "heat released in the block, over the depth or the full revolution; below zero it is cooled"),
        key("heat-slope", Quantity(Dimension::Slope, "from -10 %/K to 10 %/K"), Without("constant heat"), "change of its heat per kelvin of its mean temperature, such as 0.39 %/K of copper windings"),
        key("heat-at", Quantity(Dimension::Temperature, "at most 3000 degC"), Without("-"), "temperature at which it releases just its heat"),
        key("heat-points", List(&Pair(&[Quantity(Dimension::Temperature, ""), Quantity(Dimension::Power, "")], "")), Without("-"), "its heat at rising mean temperatures, instead of heat; straight between the points, constant beyond"),
        key("limit", Either(&[Quantity(Dimension::Temperature, "at most 3000 degC"), Inner(&LIMIT)]), Without("not judged"), "highest temperature allowed in its part; the blocks of a part have one limit between them"),
        key("theta-jc", Quantity(Dimension::Resistance, "from 0.0001 K/W to 10000 K/W"), Without("no junction"), "resistance from the junction to the block, for parts cooled at their case"),
        key("psi-jt", Quantity(Dimension::Resistance, "from 0.0001 K/W to 10000 K/W"), Without("no junction"), "junction above the top of the block per watt, for parts cooled through their board"),
        key("emissivity", Number(0.0, 1.0, "from 0 to 1"), Without("its material's"), "emissivity of its surface"),
        key("repeat", Inner(&REPEAT), Without("one block"), "a pattern of copies"),
    ],
    later: &[],
    rules: &[
        Rule::Only("limit", &["name", "part"]),
        Rule::Only("heat-slope", &["heat-at"]),
        Rule::Only("heat-at", &["heat-slope"]),
        Rule::Only("heat-slope", &["heat"]),
        Rule::Never("heat-points", &["heat", "heat-slope", "heat-at"]),
        Rule::Only("theta-jc", &["heat", "heat-points"]),
        Rule::Only("psi-jt", &["heat", "heat-points"]),
        Rule::Never("theta-jc", &["psi-jt"]),
    ],
    example: "[[block]]\nname = \"rectifier\"\npart = \"power\"\nmaterial = \"copper\"\nx = [\"30 mm\", \"32 mm\"]\ny = [\"100 mm\", \"130 mm\"]\nheat = \"6 W\"\nlimit = \"95 degC\"\n\n\
              [[block]]\nname = \"sink\"\npart = \"power\"\nmaterial = \"aluminium, anodised\"\nx = [\"32 mm\", \"36 mm\"]\ny = [\"60 mm\", \"200 mm\"]\n\n\
              [[block]]\nname = \"card\"\nmaterial = \"board, 6 layers\"\nx = [\"60 mm\", \"61.6 mm\"]\ny = [\"80 mm\", \"180 mm\"]\nheat = \"2 W\"\ntheta-jc = \"4 K/W\"\nlimit = { temperature = \"110 degC\", at = \"junction\" }\nrepeat = { count = 3, step-x = \"18 mm\" }\n",
};

#[rustfmt::skip]
pub(super) const LIMIT: Table = Table {
    header: "limit",
    what: "a limit",
    says: "A limit with the place where it holds.",
    keys: &[
        key("temperature", Quantity(Dimension::Temperature, "at most 3000 degC"), Required, "highest temperature allowed"),
        key("at", Word(&LIMIT_PLACES), Default("\"part\""), "where: anywhere in the part, or at the junctions that theta-jc or psi-jt give"),
    ],
    later: &[],
    rules: &[],
    example: "",
};

#[rustfmt::skip]
pub(super) const REPEAT: Table = Table {
    header: "repeat",
    what: "repeat",
    says: "Copies of a block, each a step further; the block itself is the first. Heat is per copy.",
    keys: &[
        key("count", Count(1, 1000), Required, "number of blocks in all"),
        key("step-x", Quantity(Dimension::Length, ""), Default("\"0 mm\""), "step along x"),
        key("step-y", Quantity(Dimension::Length, ""), Default("\"0 mm\""), "step along y"),
    ],
    later: &[],
    rules: &[Rule::AnyOf(&["step-x", "step-y"])],
    example: "",
};

#[rustfmt::skip]
pub(super) const JOINT: Table = Table {
    header: "[[joint]]",
    what: "a joint",
    says: "The resistance between blocks that touch. Without one heat passes as if they were of one piece.",
    keys: &[
        key("between", Pair(&[Text, Text], ""), Required, "two blocks or parts; every touching pair of them gets the joint"),
        key("resistance", Quantity(Dimension::AreaResistance, "from 0 to 10000 K cm2/W"), Required, "resistance times area"),
    ],
    later: &[],
    rules: &[],
    example: "[[joint]]\nbetween = [\"rectifier\", \"sink\"]\nresistance = \"0.6 K cm2/W\"\n",
};

#[rustfmt::skip]
pub(super) const SLOT: Table = Table {
    header: "[[slot]]",
    what: "a slot",
    says: "An opening in the edge of the section through which the housing breathes, in, out, or both at once.",
    keys: &[
        key("name", Text, Without("\"slot 1\", \"slot 2\", ..."), "what tables call it"),
        key("side", Word(&SIDE_NAMES), Required, "the side it lies in"),
        key("from", Quantity(Dimension::Length, ""), Required, "where it begins along the side"),
        key("to", Quantity(Dimension::Length, "more than from"), Required, "where it ends"),
        key("loss", Number(0.0, 1e6, "from 0 to 1e6"), Without("-"), "loss coefficient on the mean speed through the whole opening: what of the dynamic pressure is lost beyond the speed itself"),
        key("kind", Word(&["louvre", "perforated", "mesh"]), Without("-"), "what covers the opening, instead of loss; its loss then follows the Reynolds number of the result"),
        key("free-area", Quantity(Dimension::Share, "from 1 % to 100 %"), Without("-"), "clear share of the opening"),
        key("blocked", Quantity(Dimension::Share, "from 0 % to 95 %"), Default("\"0 %\""), "share of the free area lost to dust, leaves or paint"),
        key("gap", Quantity(Dimension::Length, "from 0.01 mm to 500 mm"), Without("-"), "clear width between the blades of a louvre"),
        key("blade", Quantity(Dimension::Length, "from 0.01 mm to 500 mm"), Without("-"), "length of the blades along the flow"),
        key("hole", Quantity(Dimension::Length, "from 0.01 mm to 500 mm"), Without("-"), "diameter of the holes of perforated sheet"),
        key("sheet", Quantity(Dimension::Length, "from 0.01 mm to 500 mm"), Without("-"), "thickness of perforated sheet"),
        key("wire", Quantity(Dimension::Length, "from 0.01 mm to 500 mm"), Without("-"), "thickness of the wires of a mesh"),
        key("opening", Quantity(Dimension::Length, "from 0.01 mm to 500 mm"), Without("-"), "clear width between the wires of a mesh, instead of free-area"),
        key("fan", Text, Without("no fan"), "name of the fan that stands in it"),
    ],
    later: &[],
    rules: &[
        Rule::OneOf(&[&["loss"], &["kind"]]),
        Rule::Never("loss", &["free-area", "blocked", "gap", "blade", "hole", "sheet", "wire", "opening"]),
        Rule::Needs("kind", "louvre", &["free-area", "gap", "blade"]),
        Rule::Needs("kind", "perforated", &["free-area", "hole", "sheet"]),
        Rule::Needs("kind", "mesh", &["wire"]),
        Rule::Never("free-area", &["opening"]),
    ],
    example: "[[slot]]\nname = \"floor\"\nside = \"bottom\"\nfrom = \"40 mm\"\nto = \"100 mm\"\nloss = 1.5\n\n\
              [[slot]]\nname = \"roof\"\nside = \"top\"\nfrom = \"40 mm\"\nto = \"100 mm\"\nkind = \"perforated\"\nfree-area = \"60 %\"\nhole = \"4 mm\"\nsheet = \"1 mm\"\nfan = \"backup\"\n",
};

#[rustfmt::skip]
pub(super) const FAN: Table = Table {
    header: "[[fan]]",
    what: "a fan",
    says: "A fan in one slot, spread over the whole of it. Flows are those of the whole slot: over the depth or the full revolution.",
    keys: &[
        key("name", Text, Required, "what the slot calls it"),
        key("curve", List(&Pair(&[Quantity(Dimension::VolumeFlow, ""), Quantity(Dimension::Pressure, "")], "")), Required, "points of flow and pressure at full speed, flows rising from 0"),
        key("density", Quantity(Dimension::Density, "from 0.1 kg/m3 to 5 kg/m3"), Default("\"1.2 kg/m3\""), "density of the air for which the curve holds"),
        key("speed", Quantity(Dimension::Share, "from 0 % to 200 %"), Default("\"100 %\""), "its speed; by the fan laws flow goes with it, pressure with its square"),
        key("direction", Word(&["in", "out"]), Required, "whether it blows into the section or out of it"),
        key("stopped-loss", Number(0.0, 1e6, "from 0 to 1e6"), Without("-"), "loss coefficient of the standing fan on the speed through its slot; needed at speed 0"),
    ],
    later: &[],
    rules: &[],
    example: "[[fan]]\nname = \"backup\"\ncurve = [[\"0 m3/h\", \"14 Pa\"], [\"20 m3/h\", \"9 Pa\"], [\"38 m3/h\", \"0 Pa\"]]\nspeed = \"40 %\"\ndirection = \"out\"\n",
};

#[rustfmt::skip]
pub(super) const SIDES: Table = Table {
    header: "[sides]",
    what: "[sides]",
    says: "What the four edges of the section do where no slot is. The left side of an axisymmetric section is its axis.",
    keys: &[
        key("left", SIDE_KIND, Default("\"adiabatic\""), "the left side"),
        key("right", SIDE_KIND, Default("\"adiabatic\""), "the right side"),
        key("bottom", SIDE_KIND, Default("\"adiabatic\""), "the bottom side"),
        key("top", SIDE_KIND, Default("\"adiabatic\""), "the top side"),
    ],
    later: &[],
    rules: &[],
    example: "[sides]\nleft = { temperature = \"45 degC\", emissivity = 0.9 }\nright = { film = \"still air\", emissivity = 0.9, wall = { material = \"PC/ABS\", thickness = \"2 mm\" }, outer-emissivity = 0.9, surroundings = \"35 degC\", sun = \"600 W/m2\", absorptance = 0.5 }\nbottom = { emissivity = 0.9 }\ntop = { emissivity = 0.9 }\n",
};

#[rustfmt::skip]
pub(super) const SIDE: Table = Table {
    header: "a side",
    what: "a side",
    says: "\"adiabatic\": a wall that lets no heat through; \"symmetry\": the mirror of the other half; \
           \"open\": air passes freely, ambient air enters; or a table. With an emissivity alone it is an adiabatic wall.",
    keys: &[
        key("temperature", Quantity(Dimension::Temperature, "at most 2000 degC"), Without("-"), "a wall at this temperature"),
        key("flux", Quantity(Dimension::Flux, "0 W/m2, or from 1e-6 W/m2 to 1e7 W/m2 in size"), Without("-"), "a wall through which so much heat enters; below zero it leaves"),
        key("film", Either(&[Word(&["still air"]), Quantity(Dimension::Film, "from 0.001 W/(m2 K) to 1e6 W/(m2 K)")]), Without("-"), "a thin wall with this film coefficient to ambient outside; \"still air\": that of still air at a surface of its height, place and temperature"),
        key("emissivity", Number(0.0, 1.0, "from 0 to 1"), Without("white, if anything radiates"), "emissivity of the inner face"),
        key("wall", Inner(&WALL), Without("no resistance"), "what the wall is made of, across; heat along it is left out"),
        key("outer-emissivity", Number(0.0, 1.0, "from 0 to 1"), Without("no radiation of its own"), "emissivity of the outer face, which radiates beside the film"),
        key("surroundings", Quantity(Dimension::Temperature, "from -150 degC to 2000 degC"), Without("ambient"), "temperature of what the outer face sees"),
        key("sun", Quantity(Dimension::Flux, "from 0 W/m2 to 2000 W/m2"), Without("none"), "sunshine on the outer face"),
        key("absorptance", Number(0.0, 1.0, "from 0 to 1"), Without("-"), "share of the sunshine that the outer face takes up"),
    ],
    later: &[],
    rules: &[
        Rule::AtMostOne(&["temperature", "flux", "film"]),
        Rule::AnyOf(&["temperature", "flux", "film", "emissivity"]),
        Rule::Only("wall", &["film"]),
        Rule::Only("outer-emissivity", &["film"]),
        Rule::Only("surroundings", &["outer-emissivity"]),
        Rule::Only("sun", &["absorptance"]),
        Rule::Only("absorptance", &["sun"]),
        Rule::Only("sun", &["film"]),
    ],
    example: "",
};

#[rustfmt::skip]
pub(super) const WALL: Table = Table {
    header: "wall",
    what: "a wall",
    says: "The wall of a side.",
    keys: &[
        key("material", Text, Required, "name of a built-in material or of one of your own"),
        key("thickness", Quantity(Dimension::Length, "from 0.001 mm to 100 mm"), Required, "its thickness"),
    ],
    later: &[],
    rules: &[],
    example: "",
};

/// Keys that one looks for and that cannot be: the reason, and what to write instead.
pub(super) const NEVER: [(&str, &str, &str); 1] = [(
    "theta-ja",
    "theta-ja holds for the standard's board in still air, not for this housing",
    "write theta-jc or psi-jt; the way on to ambient is what is computed here",
)];

#[rustfmt::skip]
pub(super) const PROBE: Table = Table {
    header: "[[probe]]",
    what: "a probe",
    says: "A point or a straight line whose temperatures and speeds are reported.",
    keys: &[
        key("name", Text, Without("\"probe 1\", \"probe 2\", ..."), "what tables call it"),
        key("at", Pair(&LENGTHS, ""), Without("-"), "a point: its x and y"),
        key("from", Pair(&LENGTHS, ""), Without("-"), "one end of a line"),
        key("to", Pair(&LENGTHS, "another point than from"), Without("-"), "the other end"),
    ],
    later: &[],
    rules: &[Rule::OneOf(&[&["at"], &["from", "to"]])],
    example: "[[probe]]\nname = \"TC1\"\nat = [\"48 mm\", \"250 mm\"]\n\n[[probe]]\nname = \"below the roof\"\nfrom = [\"0 mm\", \"290 mm\"]\nto = [\"120 mm\", \"290 mm\"]\n",
};

#[rustfmt::skip]
pub(super) const MESH: Table = Table {
    header: "[mesh]",
    what: "[mesh]",
    says: "How fine the section is divided. Lines fall on every edge of blocks and slots.",
    keys: &[
        key("cell", Quantity(Dimension::Length, "more than 0, no larger than the section, at least 1/100000 of the section"), Without("from the section"), "largest cell"),
        key("cells", Pair(&[Count(1, 20_000), Count(1, 20_000)], "from 1 to 20000 along each direction and 20 million in all"), Without("a graded mesh"), "so many equal cells along x and y instead"),
        key("wall", Quantity(Dimension::Length, "more than 0, no larger than cell, at least 1/1000000 of the section"), Without("from the boundary layer"), "first cell at surfaces"),
        key("growth", Number(1.0, 2.0, "more than 1 and at most 2"), Default("1.2"), "largest ratio of neighbouring cells"),
        key("across", Count(1, 64), Default("8"), "least number of cells across every gap, slot and fin"),
    ],
    later: &[],
    rules: &[Rule::Never("cells", &["cell", "wall", "growth", "across"])],
    example: "[mesh]\ncell = \"4 mm\"\nwall = \"2 mm\"\nacross = 4\n",
};

#[rustfmt::skip]
pub(super) const SOLVE: Table = Table {
    header: "[solve]",
    what: "[solve]",
    says: "When to stop. The bounds on heat (1e-6) and mass (1e-9) balance are fixed.",
    keys: &[
        key("tolerance", Number(1e-12, 1e-2, "from 1e-12 to 1e-2"), Default("1e-6"), "bound on all residuals, relative to their scales"),
        key("max-iterations", Count(1, 10_000_000), Default("20000"), "bound on the iterations"),
    ],
    later: &[],
    rules: &[],
    example: "[solve]\ntolerance = 1e-6\nmax-iterations = 5000\n",
};
