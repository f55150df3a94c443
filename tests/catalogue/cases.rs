//! What provokes each message: files and a command line.

/// A case: its name, the files that it needs (a text that begins with `-> ` is a
/// link), and what is typed after `chordwise`.
pub(crate) struct Case {
    pub(crate) name: String,
    pub(crate) files: Vec<(&'static str, Vec<u8>)>,
    pub(crate) arguments: Vec<String>,
}

fn case(name: &str, files: &[(&'static str, &str)], line: &str) -> Case {
    Case {
        name: name.to_owned(),
        files: files
            .iter()
            .map(|(name, text)| (*name, text.as_bytes().to_vec()))
            .collect(),
        arguments: line.split_whitespace().map(str::to_owned).collect(),
    }
}

/// `chordwise check` of a set with one surface.
fn surface(name: &str, surface: &str) -> Case {
    let text = format!("(patches: [\n    (name: \"wing/1\", surface: {surface}),\n])");
    case(name, &[("set.ron", &text)], "check set.ron")
}

/// `chordwise check` of a text.
fn text(name: &str, text: &str) -> Case {
    case(name, &[("set.ron", text)], "check set.ron")
}

/// A set with one good patch, and more fields.
fn with(name: &str, fields: &str) -> Case {
    let set = format!(
        "(\n    patches: [(name: \"wing/1\", surface: Sphere(radius: 1))],\n    {fields}\n)"
    );
    text(name, &set)
}

const BALL: (&str, &str) = (
    "ball.ron",
    "(patches: [(name: \"ball\", surface: Sphere(radius: 20))])",
);

/// Two planes that meet within a wide gap tolerance.
const GAPPED: (&str, &str) = (
    "gapped.ron",
    "(tolerance: (gap: 0.5), patches: [
        (name: \"a\", surface: Plane(origin: (0, 0, 0), u: (50, 0, 0), v: (0, 50, 0))),
        (name: \"b\", surface: Plane(origin: (50.2, 0, 0), u: (50, 0, 0), v: (0, 50, 0))),
    ])",
);

const LINE: &str = "Bezier(net: [[(0, 0, 0), (1, 0, 0)], [(2, 0, 0), (3, 0, 0)]])";
const NET: &str = "net: [[(0, 0, 0), (0, 1, 0)], [(1, 0, 0), (1, 1, 0)]]";
const SPLINE: &str = "[(0, 0, 0), (0, 1, 0), (0, 2, 0)], [(1, 0, 0), (1, 1, 0), (1, 2, 0)], [(2, 0, 0), (2, 1, 0), (2, 2, 0)]";

fn spline(name: &str, degree: &str, knots: &str) -> Case {
    let knots_v = "[0, 0, 0, 1, 1, 1]";
    surface(
        name,
        &format!("BSpline(degree: {degree}, knots: ({knots}, {knots_v}), net: [{SPLINE}])"),
    )
}

/// Everything the reader says of a text that is no set.
fn syntax() -> Vec<Case> {
    vec![
        text("empty file", ""),
        text("no set", "hello"),
        text(
            "cut short",
            "(patches: [(name: \"a\", surface: Sphere(radius: 1)",
        ),
        text(
            "unknown field",
            "(patches: [(name: \"a\", surfase: Sphere(radius: 1))])",
        ),
        text(
            "unknown kind",
            "(patches: [(name: \"a\", surface: Shpere(radius: 1))])",
        ),
        text("missing field", "(patches: [(name: \"a\")])"),
        text("field twice", "(name: \"a\", name: \"b\", patches: [])"),
        text("no structure", "(patches: [3])"),
        text(
            "no number",
            "(patches: [(name: \"a\", surface: Sphere(radius: wide))])",
        ),
        text(
            "no whole number",
            "(points: [(0, 0, 0)], patches: [(name: \"a\", surface: Bezier(indexed: [[x]]))])",
        ),
        text(
            "two coordinates",
            "(patches: [(name: \"a\", surface: Plane(origin: (0, 0), u: (1, 0, 0), v: (0, 1, 0)))])",
        ),
        text("too deep", &format!("(patches: {})", "[".repeat(300))),
        text("attribute", "#!/bin/sh\n"),
        text("comma", "(name: \"a\" patches: [])"),
        text("list", "(patches: 3)"),
        text(
            "end of a list",
            "(patches: [(name: \"a\", surface: Sphere(radius: 1)) 3])",
        ),
        text(
            "end of a structure",
            "(patches: [(name: \"a\", surface: Sphere(radius: 1 2))])",
        ),
        text("colon", "(name \"a\")"),
        text("name of a field", "(3: 4)"),
        text("no text", "(name: 3)"),
        text("text not closed", "(name: \"a)"),
        text("escape", "(name: \"\\q\")"),
        text("comment not closed", "( /* name: 3)"),
        text("two sets", "(patches: []) (patches: [])"),
        text("letter", "(name: ?)"),
        text(
            "no flag",
            "(patches: [(name: \"a\", surface: Sphere(radius: 1), flip: 3)])",
        ),
        text("underscore", "(tolerance: (chord: 0_1))"),
        text("extension", "#![enable(speed)]\n(patches: [])"),
        text("other name", "PatchSet(patches: [])"),
        text(
            "digit",
            "(points: [(0, 0, 0)], patches: [(name: \"a\", surface: Bezier(indexed: [[0b12]]))])",
        ),
        text(
            "huge index",
            "(points: [(0, 0, 0)], patches: [(name: \"a\", surface: Bezier(indexed: [[99999999999999999999999]]))])",
        ),
        text(
            "degrees",
            "(patches: [(name: \"a\", surface: BSpline(degree: (1, 2, 3)))])",
        ),
        Case {
            files: vec![("set.ron", b"(patches: [(name: \"fl\xfcgel\")])".to_vec())],
            ..text("not UTF-8", "")
        },
        case("no file", &[], "check nothing.ron"),
    ]
}

/// Everything that can be wrong with a surface.
fn surfaces() -> Vec<Case> {
    vec![
        surface(
            "not finite",
            "Bezier(net: [[(0, 0, 0), (0, NaN, 0)], [(1, 0, 0), (1, 1, 0)]])",
        ),
        surface(
            "too large",
            "Bezier(net: [[(0, 0, 0), (0, 2e9, 0)], [(1, 0, 0), (1, 1, 0)]])",
        ),
        surface("not positive", "Sphere(radius: 0)"),
        surface("negative", "Cone(radius: -1, top_radius: 2, height: 5)"),
        surface(
            "weight",
            &format!("Bezier({NET}, weights: [[1, 1], [1, 0]])"),
        ),
        surface("choice", "Bezier()"),
        surface("both", &format!("Bezier({NET}, indexed: [[0, 0], [0, 0]])")),
        surface("empty net", "Bezier(net: [])"),
        surface(
            "ragged net",
            "Bezier(net: [[(0, 0, 0), (0, 1, 0)], [(1, 0, 0)]])",
        ),
        surface("weight count", &format!("Bezier({NET}, weights: [[1, 1]])")),
        surface("degree", "Bezier(net: [[(0, 0, 0)], [(1, 0, 0)]])"),
        surface(
            "too few points",
            "BSpline(degree: (3, 1), knots: ([0, 0, 1, 1], [0, 0, 1, 1]), net: [[(0, 0, 0), (0, 1, 0)], [(1, 0, 0), (1, 1, 0)]])",
        ),
        spline("knot count", "(2, 2)", "[0, 0, 1, 1]"),
        spline("knot order", "(2, 2)", "[0, 0, 0, 1, 0.5, 1]"),
        surface(
            "knot multiplicity",
            "BSpline(degree: (1, 1), knots: ([0, 0, 0.5, 0.5, 1, 1], [0, 0, 1, 1]), net: [[(0, 0, 0), (0, 1, 0)], [(1, 0, 0), (1, 1, 0)], [(2, 0, 0), (2, 1, 0)], [(3, 0, 0), (3, 1, 0)]])",
        ),
        spline("empty domain", "(2, 2)", "[0, 0, 1, 1, 2, 2]"),
        surface("index", "Bezier(indexed: [[0, 1], [2, 3]])"),
        surface(
            "no direction",
            "Plane(origin: (0, 0, 0), u: (0, 0, 0), v: (0, 1, 0))",
        ),
        surface(
            "parallel start",
            "Cylinder(radius: 1, height: 2, axis: (0, 0, 1), start: (0, 0, 3))",
        ),
        surface(
            "flat plane",
            "Plane(origin: (0, 0, 0), u: (1, 0, 0), v: (2, 0, 0))",
        ),
        surface(
            "angle range",
            "Cylinder(radius: 1, height: 2, angle_deg: (90, 0))",
        ),
        surface("latitude", "Sphere(radius: 1, latitude_deg: (-90, 120))"),
        surface("spindle", "Torus(major: 1, minor: 2)"),
        surface("flat cone", "Cone(radius: 1, top_radius: 1, height: 0)"),
        surface(
            "profile on axis",
            "Revolution(profile: Line(from: (0, 0, 0), to: (0, 0, 5)))",
        ),
        surface(
            "beyond numbers",
            "Revolution(profile: Line(from: (1e9, 1e9, 0), to: (1e9, 1e9, 1e9)), center: (-1e9, -1e9, 0))",
        ),
        surface("Coons of too many pieces", &{
            let curve = |from: [u32; 2], way: [u32; 2]| {
                let points: Vec<String> = (0..=101)
                    .map(|k| format!("({}, {}, 0)", from[0] + k * way[0], from[1] + k * way[1]))
                    .collect();
                let inner: Vec<String> = (1..101).map(|k| k.to_string()).collect();
                format!(
                    "BSpline(degree: 1, knots: [0, 0, {}, 101, 101], points: [{}])",
                    inner.join(", "),
                    points.join(", ")
                )
            };
            format!(
                "Coons(u0: {}, u1: {}, v0: {}, v1: {})",
                curve([0, 0], [0, 1]),
                curve([101, 0], [0, 1]),
                curve([0, 0], [1, 0]),
                curve([0, 101], [1, 0])
            )
        }),
        surface(
            "Coons corner",
            "Coons(u0: Line(from: (0, 0, 0), to: (0, 1, 0)), u1: Line(from: (1, 0, 0), to: (1, 1, 0)), v0: Line(from: (0, 0, 0), to: (1, 0, 0)), v1: Line(from: (0, 3, 0), to: (1, 1, 0)))",
        ),
        surface(
            "Coons weight",
            "Coons(u0: Bezier(points: [(0, 0, 0), (0, 0.5, 0), (0, 1, 0)], weights: [1, 0.001, 1]), u1: Bezier(points: [(1, 0, 0), (1, 0.5, 0), (1, 1, 0)], weights: [1, 0.001, 1]), v0: Bezier(points: [(0, 0, 0), (0.5, 0, 0), (1, 0, 0)], weights: [1, 0.001, 1]), v1: Bezier(points: [(0, 1, 0), (0.5, 1, 0), (1, 1, 0)], weights: [1, 0.001, 1]))",
        ),
    ]
}

/// Everything that can be wrong with a set beyond its surfaces.
fn sets() -> Vec<Case> {
    let mut cases = vec![
        text("no patches", "(patches: [])"),
        with("no size of a panel", "sizes: [(of: \"wing\", size: 0)],"),
        with("size of no panel", "sizes: [(of: \"wint\", size: 2)],"),
        text(
            "empty name",
            "(patches: [(name: \"a//b\", surface: Sphere(radius: 1))])",
        ),
        text(
            "name twice",
            "(patches: [\n(name: \"a\", surface: Sphere(radius: 1)),\n(name: \"a\", surface: Sphere(radius: 2)),\n])",
        ),
        with(
            "unknown name",
            "seams: [(between: (\"wimg/1\", U0), and: (\"wing/1\", U1), demand: G1)],",
        ),
        with("tolerance", "tolerance: (chord: 0),"),
        with("search below gap", "tolerance: (search: 0.001),"),
        with("number", "points: [(0, NaN, 0)],"),
        with(
            "axis",
            "copies: [(of: \"wing\", name: \"b\", place: (axis: (0, 0, 0)))],",
        ),
        with(
            "self seam",
            "seams: [(between: (\"wing/1\", U0), and: (\"wing/1\", U0), demand: G1)],",
        ),
        with(
            "contradiction",
            "seams: [\n(between: \"wing\", and: \"wing\", demand: G1),\n(between: \"wing\", and: \"wing\", demand: open),\n],",
        ),
        text("too many pieces", &{
            let patches: Vec<String> = (0..1000)
                .map(|k| format!("(name: \"wing/{k}\", surface: Sphere(radius: 1))"))
                .collect();
            let copies: Vec<String> = (0..501)
                .map(|k| format!("(of: \"wing\", name: \"b{k}\")"))
                .collect();
            format!(
                "(patches: [\n{}\n], copies: [\n{}\n])",
                patches.join(",\n"),
                copies.join(",\n")
            )
        }),
        surface("many faults", "Sphere(radius: -1, latitude_deg: (10, -10))"),
    ];
    let many: String = (0..53)
        .map(|k| format!("(name: \"a/{k}\", surface: Sphere(radius: -1)),\n"))
        .collect();
    let mut last = text(
        "more faults than are shown",
        &format!("(patches: [{many}])"),
    );
    last.name.push_str(", the last five lines");
    cases.push(last);
    cases
}

fn warnings() -> Vec<Case> {
    vec![
        surface(
            "collapsed edge",
            "Bezier(net: [[(0, 0, 0), (0, 0, 0)], [(1, 0, 0), (1, 1, 0)]])",
        ),
        surface("no area", LINE),
        surface(
            "folds over",
            "Bezier(net: [[(0, 0, 0), (0, 1, 0)], [(3, 0, 0), (3, 1, 0)], [(-2, 0, 0), (-2, 1, 0)], [(1, 0, 0), (1, 1, 0)]])",
        ),
        surface("tiny", "Sphere(radius: 0.001)"),
        case(
            "warned before it is refused",
            &[BALL],
            "tessellate ball.ron -o a.stl --chord 1e-7",
        ),
    ]
}

/// What is typed wrong.
fn usage() -> Vec<Case> {
    let ball = |name: &str, line: &str| case(name, &[BALL], line);
    vec![
        ball("unknown command", "tesselate ball.ron"),
        ball("unknown option", "tessellate ball.ron -o a.stl --cord 0.1"),
        ball("no output", "tessellate ball.ron"),
        ball("no extension", "tessellate ball.ron -o ball"),
        ball("no format for standard output", "tessellate ball.ron -o -"),
        ball("unknown format", "tessellate ball.ron -o a --as step"),
        ball(
            "unknown layout",
            "tessellate ball.ron -o a.stl --layout fans",
        ),
        ball(
            "layout not there",
            "tessellate ball.ron -o a.stl --layout strips",
        ),
        ball("no length", "tessellate ball.ron -o a.stl --chord 0.1ells"),
        ball(
            "no angle",
            "tessellate ball.ron -o a.stl --normal-angle 0.001",
        ),
        ball("normals of STL", "tessellate ball.ron -o a.stl --normals"),
        ball("solids elsewhere", "tessellate ball.ron -o a.ply --solids"),
        ball(
            "a family of one place",
            "tessellate ball.ron -o - --as ply --family 3",
        ),
        ball(
            "a smallest edge above the size",
            "tessellate ball.ron -o a.ply --size 1 --min-edge 2",
        ),
        ball(
            "no growth",
            "tessellate ball.ron -o a.ply --size 1 --growth 0.9",
        ),
        ball(
            "a chord that the smallest edge forbids",
            "tessellate ball.ron -o a.ply --size 1 --min-edge 1 --chord 0.0001",
        ),
        ball(
            "sized evidence in OBJ",
            "tessellate ball.ron -o a.obj --size 1 --evidence",
        ),
        ball("evidence in GLB", "tessellate ball.ron -o a.glb --evidence"),
        ball("no panel", "tessellate ball.ron -o a.stl --panel bal"),
        ball("no jobs", "tessellate ball.ron -o a.stl --jobs 0"),
        ball(
            "no number of triangles",
            "tessellate ball.ron -o a.stl --max-triangles many",
        ),
        ball(
            "no size of memory",
            "tessellate ball.ron -o a.stl --max-memory 8GiB",
        ),
        ball("no PNG", "draw ball.ron -o ball.jpg"),
        ball("no such seam", "draw ball.ron -o ball.png --zoom-seam 900"),
        ball(
            "no direction of view",
            "draw ball.ron -o ball.png --direction 0,0,0",
        ),
        ball(
            "no range",
            "draw ball.ron -o ball.png --shading mean --range 2:1",
        ),
        ball("no size", "draw ball.ron -o ball.png --size 1x1"),
        ball("no plane", "draw ball.ron -o ball.png --section w=3"),
        ball(
            "no curvature of a comb",
            "draw ball.ron -o ball.png --section x=3 --comb -1",
        ),
        ball(
            "extras in STL",
            "tessellate ball.ron -o a.stl --extra seams",
        ),
        ball("PLY as a stream", "tessellate ball.ron -o a.ply --stream"),
        ball(
            "stream to standard output",
            "tessellate ball.ron --as stl -o - --stream",
        ),
        ball("no manual", "man tesselate"),
        ball("no shell", "completions ed"),
        ball("too many panels", "demo --panels 0 -o a.ron"),
    ]
}

/// Sheets across one another and narrower than the gap tolerance, found by chance.
const CLOSED_UP: &str = "(tolerance: (chord: 3, gap: 0.5, search: 1), patches: [
    (name: \"a\", surface: Bezier(net: [[(10.6, 20.3, 0), (20, 10, 0)], [(10.6, 20.3, 0), (20, 10, 0)]])),
    (name: \"b\", surface: Bezier(net: [[(10.6, 20.3, 0), (20.3, 0, 0)], [(20, 10, 0), (10, 20, 0)]])),
    (name: \"c\", surface: Bezier(net: [[(20, 0, 0), (20, 10, 0)], [(20, 10, 0), (20, 0, 0)]])),
    (name: \"d\", surface: Bezier(net: [[(10, 20, 0), (0, 0, 0)], [(10.6, 20.3, 0), (20, 0, 0)]])),
    (name: \"e\", surface: Bezier(net: [[(20, 0, 0), (20, 0, 0)], [(0, 0, 0), (20.3, 0, 0)]])),
])";
const UNSETTLED: &str = "(tolerance: (chord: 3, gap: 0.5, search: 1), patches: [
    (name: \"a\", surface: Bezier(net: [[(0, -0.1, 0), (0, -0.1, 0)], [(10, 10, 0), (10, 10, 0)]])),
    (name: \"b\", surface: Bezier(net: [[(10, 10.2, 0), (20.2, 19.9, 0)], [(0, 0, 0), (0, -0.1, 0)]])),
    (name: \"c\", surface: Bezier(net: [[(20.2, -0.1, 0), (20.2, 19.9, 0)], [(0, 0, 0), (9.9, 19.8, 0)]])),
    (name: \"d\", surface: Bezier(net: [[(0, -0.1, 0), (20.2, 19.9, 0)], [(20.2, -0.1, 0), (0, -0.1, 0)]])),
])";

/// What cannot be meshed, written or audited.
fn runs() -> Vec<Case> {
    let ball = |name: &str, line: &str| case(name, &[BALL], line);
    let ply =
        |name: &str, text: &str| case(name, &[BALL, ("mesh.ply", text)], "audit mesh.ply ball.ron");
    let head = |vertex: &str, rest: &str| {
        format!("ply\nformat binary_little_endian 1.0\ncomment unit mm\n{vertex}{rest}end_header\n")
    };
    let xyz = "element vertex 1\nproperty double x\nproperty double y\nproperty double z\n";
    let face = "element face 0\nproperty list uchar int vertex_indices\nproperty int patch\nproperty double u0\nproperty double v0\nproperty double u1\nproperty double v1\nproperty double u2\nproperty double v2\n";
    vec![
        ball("folder as output", "tessellate ball.ron -o ./"),
        ball("no folder", "tessellate ball.ron -o new/a.stl"),
        ball(
            "input as output",
            "tessellate ball.ron -o ball.ron --as stl",
        ),
        ball("full device", "tessellate ball.ron -o /dev/full --as stl"),
        ball(
            "too many triangles at best",
            "tessellate ball.ron -o a.stl --chord 1e-7",
        ),
        ball(
            "too many triangles predicted",
            "tessellate ball.ron -o a.stl --chord 0.01 --max-triangles 12k",
        ),
        case(
            "edge that would be closed up",
            &[("set.ron", CLOSED_UP)],
            "seams set.ron",
        ),
        case(
            "corners that do not settle in a revision",
            &[BALL, ("set.ron", UNSETTLED)],
            "compare set.ron ball.ron",
        ),
        case(
            "corners that do not settle",
            &[("set.ron", UNSETTLED)],
            "seams set.ron",
        ),
        ball(
            "larger than a GLB file can be",
            "tessellate ball.ron -o a.glb --chord 4e-7 --dry-run",
        ),
        ball(
            "too much memory",
            "tessellate ball.ron -o a.stl --chord 0.001 --max-memory 20MB",
        ),
        ball(
            "chord below rounding",
            "tessellate ball.ron -o a.ply --chord 1e-14 --max-triangles 1e17 --max-memory 1e17",
        ),
        case(
            "gap beyond the chord",
            &[GAPPED],
            "tessellate gapped.ron -o a.ply",
        ),
        case(
            "single precision",
            &[(
                "far.ron",
                "(units: m, patches: [(name: \"a\", surface: Plane(origin: (500000.3, 0.7, 0.1), u: (1, 0, 0), v: (0, 1, 0)))])",
            )],
            "tessellate far.ron -o a.stl",
        ),
        case(
            "no triangles",
            &[(
                "line.ron",
                "(patches: [(name: \"a\", surface: Bezier(net: [[(0, 0, 0), (1, 0, 0)], [(2, 0, 0), (3, 0, 0)]]))])",
            )],
            "tessellate line.ron -o a.stl",
        ),
        case(
            "an edge that turns back",
            &[(
                "fold.ron",
                "(patches: [(name: \"a\", surface: Bezier(net: [[(0, 0, 0), (0, 30, 0)], [(30, 0, 0), (30, 30, 0)], [(-20, 0, 0), (-20, 30, 0)], [(10, 0, 0), (10, 30, 5)]]))])",
            )],
            "tessellate fold.ron -o a.ply --normal-angle 5",
        ),
        case(
            "a normal that jumps",
            &[(
                "fold.ron",
                "(patches: [(name: \"a\", surface: Bezier(net: [[(0, 0, 0), (0, 1, 0), (0, 2, 0), (0, 3, 0)], [(1, 0, 0), (4, 4, 1), (4, -1, 1), (1, 3, 0)], [(2, 0, 0), (-1, 4, 1), (-1, -1, 1), (2, 3, 0)], [(3, 0, 0), (3, 1, 0), (3, 2, 0), (3, 3, 0)]]))])",
            )],
            "tessellate fold.ron -o a.ply --normal-angle 60",
        ),
        case(
            "chord below what doubles resolve",
            &[(
                "far.ron",
                "(patches: [(name: \"a\", surface: Bezier(net: [[(9e8, 0, 0), (9e8, 1, 0)], [(900000001, 0, 0), (900000001, 1, 1)]]))])",
            )],
            "tessellate far.ron -o a.ply --chord 1e-8",
        ),
        ply("audit of no PLY", "solid\n"),
        ply(
            "audit of a PLY cut short",
            "ply\nformat binary_little_endian 1.0\n",
        ),
        ply(
            "audit without evidence",
            &head(
                xyz,
                "element face 0\nproperty list uchar int vertex_indices\n",
            ),
        ),
        ply(
            "audit of an empty mesh",
            &head(&xyz.replace("vertex 1", "vertex 0"), face),
        ),
        ply("audit with too few bytes", &head(xyz, face)),
        ply("audit of a text PLY", "ply\nformat ascii 1.0\nend_header\n"),
        ply(
            "audit with a list of vertices",
            &head("element vertex 1\nproperty float x\n", face),
        ),
        case(
            "audit with a bad number",
            &[
                BALL,
                (
                    "mesh.ply",
                    &(head(xyz, face)
                        + "\u{7f}\u{7f}\u{7f}\u{7f}\u{7f}\u{7f}\u{7f}\u{7f}xxxxxxxxyyyyyyyy"),
                ),
            ],
            "audit mesh.ply ball.ron",
        ),
        ply(
            "audit in another unit",
            &head(&xyz.replace("vertex 1", "vertex 0"), face).replace("unit mm", "unit m"),
        ),
        case(
            "audit of a face without corners",
            &[
                BALL,
                (
                    "mesh.ply",
                    &(head(xyz, &face.replace("face 0", "face 1")) + &"\0".repeat(24 + 65)),
                ),
            ],
            "audit mesh.ply ball.ron",
        ),
        case(
            "links that go round",
            &[BALL, ("round.stl", "-> round.stl")],
            "tessellate ball.ron -o round.stl",
        ),
        case(
            "a chord below all numbers",
            &[(
                "metres.ron",
                "(units: m, patches: [(name: \"ball\", surface: Sphere(radius: 20))])",
            )],
            "tessellate metres.ron -o a.stl --chord 5e-324mm",
        ),
        ball("audit of no file", "audit mesh.ply ball.ron"),
        ball("comparing standard input with itself", "compare - -"),
        case(
            "comparing sets in two units",
            &[
                BALL,
                (
                    "metres.ron",
                    "(units: m, patches: [(name: \"ball\", surface: Sphere(radius: 20))])",
                ),
            ],
            "compare ball.ron metres.ron",
        ),
    ]
}

pub(crate) fn all() -> Vec<(&'static str, Vec<Case>)> {
    vec![
        ("the text", syntax()),
        ("surfaces", surfaces()),
        ("sets", sets()),
        ("warnings", warnings()),
        ("usage", usage()),
        ("runs", runs()),
    ]
}
