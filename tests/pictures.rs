//! Pictures and page of a solve: well-formed, complete, standing alone, the same when made again,
//! and in a browser without overlaps.

#![allow(clippy::print_stdout)]
#![allow(clippy::unwrap_used)]

use std::collections::BTreeMap;
use std::fmt::Write as _;
use std::fs;
use std::path::Path;
use std::process::{Command, Stdio};

use roxmltree::Document;
use tempfile::TempDir;
use ventrise::case::Case;
use ventrise::output::pictures::layout;

const RING: &str = include_str!("cases/ring.toml");
const PICTURES: [&str; 7] = [
    "margins.svg",
    "layout.svg",
    "temperature.svg",
    "speed.svg",
    "heat-flux.svg",
    "profiles.svg",
    "history.svg",
];
/// Largest page that a mailbox takes without thinking [bytes].
const LARGEST_PAGE: usize = 3_000_000;

/// Many things with long and hostile names: what crowds a picture.
fn crowded() -> String {
    let mut text = String::from(
        "title = \"A <crowd> & \\\"more\\\": https://example.invalid/ with a title that is far \
         longer than any picture is wide, and goes on\"\n\
         [section]\ngeometry = \"planar\"\nwidth = \"400 mm\"\nheight = \"150 mm\"\ndepth = \"1 m\"\n\
         [ambient]\ntemperature = \"-20 degC\"\n",
    );
    for n in 0..30 {
        let (column, row) = (n % 10, n / 10);
        let (x, y) = (10 + 38 * column, 10 + 45 * row);
        let limit = if n % 3 == 0 { "limit = \"-15 degC\"\n" } else { "" };
        write!(
            text,
            "[[block]]\nname = \"part <{n}> & a name that is much too long for its place\"\n\
             material = \"aluminium\"\nx = [\"{x} mm\", \"{} mm\"]\ny = [\"{y} mm\", \"{} mm\"]\n\
             heat = \"{} W\"\n{limit}",
            x + 14,
            y + 20,
            n % 4
        )
        .unwrap();
    }
    for n in 0..16 {
        let side = if n % 2 == 0 { "bottom" } else { "top" };
        let from = 5 + 24 * n;
        write!(
            text,
            "[[slot]]\nname = \"slot {n}\"\nside = \"{side}\"\nfrom = \"{from} mm\"\nto = \
             \"{} mm\"\nloss = 1\n",
            from + 8
        )
        .unwrap();
    }
    for n in 0..14 {
        let x = 30 + 2 * n;
        write!(text, "[[probe]]\nname = \"p{n}\"\nat = [\"{x} mm\", \"75 mm\"]\n").unwrap();
    }
    for n in 0..3 {
        let y = 32 + 45 * n;
        write!(
            text,
            "[[probe]]\nname = \"line {n} <&>\"\nfrom = [\"0 mm\", \"{y} mm\"]\nto = [\"400 mm\", \
             \"{y} mm\"]\n"
        )
        .unwrap();
    }
    text + "[sides]\nleft = { film = \"8 W/(m2 K)\" }\nright = { temperature = \"-20 degC\" }\n\
            [mesh]\ncell = \"8 mm\"\nacross = 1\n[solve]\nmax-iterations = 4\n"
}

fn run(place: &Path, words: &[&str]) -> (i32, String) {
    let mut command = Command::new(env!("CARGO_BIN_EXE_ventrise"));
    let output = command.current_dir(place).args(words).output().unwrap();
    let text = |bytes: &[u8]| String::from_utf8(bytes.to_vec()).unwrap();
    (output.status.code().unwrap(), text(&output.stdout) + &text(&output.stderr))
}

/// A case solved into `x.results` of a folder of its own.
fn solved(case: &str, code: i32) -> TempDir {
    let place = tempfile::tempdir().unwrap();
    fs::write(place.path().join("x.toml"), case).unwrap();
    let (ended, said) = run(place.path(), &["solve", "x.toml", "--threads", "1"]);
    assert_eq!(ended, code, "{said}");
    place
}

/// Pictures and page of a results folder, by name.
fn drawn(folder: &Path) -> BTreeMap<String, String> {
    let entries = fs::read_dir(folder).unwrap().map(|e| e.unwrap().path());
    let is_drawn = |p: &std::path::PathBuf| {
        matches!(p.extension().and_then(|e| e.to_str()), Some("svg" | "html"))
    };
    let name = |p: &Path| p.file_name().unwrap().to_str().unwrap().to_string();
    entries.filter(is_drawn).map(|p| (name(&p), fs::read_to_string(&p).unwrap())).collect()
}

/// All text of a drawing.
fn said(svg: &str) -> String {
    let document = Document::parse(svg).unwrap();
    let texts =
        document.descendants().filter(|n| n.has_tag_name(("http://www.w3.org/2000/svg", "text")));
    texts.filter_map(|n| n.text()).collect::<Vec<_>>().join("\n")
}

#[test]
fn pictures_are_well_formed_and_name_what_they_show() {
    let place = solved(RING, 0);
    let files = drawn(&place.path().join("x.results"));
    for name in PICTURES {
        let svg = &files[name];
        let document = Document::parse(svg).unwrap();
        let root = document.root_element();
        let view: Vec<f64> =
            root.attribute("viewBox").unwrap().split(' ').map(|v| v.parse().unwrap()).collect();
        assert_eq!(view[..3], [0.0, 0.0, 480.0], "{name}");
        assert!((60.0..1500.0).contains(&view[3]), "{name}: {view:?}");
        for node in document.descendants().filter(|n| n.is_element()) {
            for attribute in node.attributes().filter(|a| a.name() == "href") {
                assert!(attribute.value().starts_with("data:image/png;base64,"), "{name}");
            }
        }
        all_inside(name, svg);
    }
    let drawn = said(&files["layout.svg"]);
    for words in [
        "core, main",
        "1 W, limit 85 °C",
        "metal",
        "axis: symmetry",
        "right: wall with a film of 8 W/(m² K) to 40 °C",
        "floor: bottom, 60 to 100 mm, 201 cm², loss 1.5",
        "P1",
        "TC1: at (50, 110) mm",
        "column: from (50, 0) to (50, 200) mm",
        "radius, mm",
        "height, mm",
    ] {
        assert!(drawn.contains(words), "{words}:\n{drawn}");
    }
    assert!(said(&files["temperature.svg"]).contains("temperature, °C"));
    assert!(said(&files["temperature.svg"]).contains("radio"));
    assert!(said(&files["speed.svg"]).contains("speed, m/s"));
    assert!(said(&files["margins.svg"]).contains("below its limit of 85.0"));
    assert!(said(&files["profiles.svg"]).contains("column"));
    assert!(said(&files["history.svg"]).contains("tolerance 1e-6"));
}

#[test]
fn a_crowded_case_is_drawn_too_and_its_names_stay_text() {
    let place = solved(&crowded(), 1);
    let files = drawn(&place.path().join("x.results"));
    for name in PICTURES {
        Document::parse(&files[name]).unwrap();
    }
    let page = &files["report.html"];
    assert!(page.contains("A &lt;crowd&gt; &amp; &quot;more&quot;"), "title");
    assert!(!page.contains("<crowd>") && !page.contains("part <"), "names are markup");
    assert!(page.contains("Undecided"));
    assert!(page.len() < LARGEST_PAGE, "{}", page.len());
}

/// Places of everything in a drawing.
fn all_inside(name: &str, svg: &str) {
    let document = Document::parse(svg).unwrap();
    let view = document.root_element().attribute("viewBox").unwrap();
    let view: Vec<f64> = view.split(' ').map(|v| v.parse().unwrap()).collect();
    for node in document.descendants().filter(|n| n.is_element()) {
        for axis in ["x", "y", "x1", "x2", "y1", "y2", "cx", "cy"] {
            let value = node.attribute(axis).map(|v| v.parse::<f64>().unwrap());
            let end = if axis.starts_with('y') || axis == "cy" { view[3] } else { view[2] };
            assert!(value.is_none_or(|v| (-0.01..=end + 0.01).contains(&v)), "{name}: {node:?}");
        }
    }
}

#[test]
fn sections_of_every_shape_stay_inside_their_drawing() {
    let sizes = [1.0, 7.3, 61.0, 333.3, 900.0];
    for (w, h) in sizes.iter().flat_map(|w| sizes.map(|h| (*w, h))) {
        for geometry in ["\"planar\"\ndepth = \"1 m\"", "\"axisymmetric\""] {
            let text = format!(
                "[section]\ngeometry = {geometry}\nwidth = \"{w} mm\"\nheight = \"{h} mm\"\n\
                 [ambient]\ntemperature = \"20 degC\"\n[[block]]\nname = \"thin\"\nmaterial = \
                 \"copper\"\nx = [\"{} mm\", \"{} mm\"]\ny = [\"{} mm\", \"{} mm\"]\nheat = \
                 \"1 W\"\n[[slot]]\nname = \"vent\"\nside = \"top\"\nfrom = \"{} mm\"\nto = \
                 \"{w} mm\"\nloss = 1.5\n[sides]\nright = \"open\"\n",
                0.3 * w,
                0.301 * w,
                0.1 * h,
                0.9 * h,
                0.9 * w
            );
            let case = Case::parse(&text, "shape.toml").unwrap_or_else(|e| panic!("{e}"));
            let lines = |extent: f64| (0..=50).map(move |n| 1e-3 * extent * f64::from(n) / 50.0);
            let [x, y] = [w, h].map(|extent| lines(extent).collect::<Vec<f64>>());
            let svg = layout(&case, &x, &y);
            all_inside(&format!("{w} x {h} {geometry}"), &svg);
            assert!(said(&svg).contains("thin") && said(&svg).contains("vent: top"), "{w} x {h}");
        }
    }
}

#[test]
fn the_page_answers_the_question_and_needs_nothing_else() {
    let place = solved(RING, 0);
    let page = &drawn(&place.path().join("x.results"))["report.html"];
    assert!(page.len() < LARGEST_PAGE, "{}", page.len());
    for word in [" href=\"", " src=", "url(", "@import", "<script", "<link", "http:", "https:"] {
        assert!(!page.contains(word), "{word}");
    }
    let embedded = page.matches("xlink:href=\"").count();
    assert_eq!(embedded, page.matches("xlink:href=\"data:image/png;base64,").count());
    assert_eq!(page.matches("<svg ").count(), PICTURES.len());
    let summary = fs::read_to_string(place.path().join("x.results/summary.json")).unwrap();
    let summary: serde_json::Value = serde_json::from_str(&summary).unwrap();
    let part = &summary["parts"][0];
    let sentence = format!(
        "“radio” reaches {:.1} °C and has the least margin, {:.1} K to its limit of 85.0 °C.",
        part["max_c"].as_f64().unwrap(),
        part["margin_k"].as_f64().unwrap()
    );
    let sha256 = summary["case"]["sha256"].as_str().unwrap();
    for words in [
        sentence.as_str(),
        sha256,
        ">Yes<",
        "Heat by radiation is not counted",
        "perfect contact",
        "not assessed",
        "not a statement of conformity",
        "Local codes and licensed practice decide",
        "geometry = &quot;axisymmetric&quot;",
        concat!("Ventrise ", env!("CARGO_PKG_VERSION")),
    ] {
        assert!(page.contains(words), "{words}");
    }
    // Every id once: the drawings share the page.
    let mut ids: Vec<&str> =
        page.split(" id=\"").skip(1).filter_map(|rest| rest.split('"').next()).collect();
    let count = ids.len();
    ids.sort_unstable();
    ids.dedup();
    assert_eq!((ids.len(), count), (2 * PICTURES.len(), 2 * PICTURES.len()));
}

#[test]
fn made_again_from_the_folder_they_are_the_same() {
    for (case, code) in [(RING.to_string(), 0), (crowded(), 1)] {
        let place = solved(&case, code);
        let folder = place.path().join("x.results");
        let before = drawn(&folder);
        for name in before.keys() {
            fs::remove_file(folder.join(name)).unwrap();
        }
        let (ended, said) = run(place.path(), &["report", "x.results"]);
        assert_eq!(ended, 0, "{said}");
        let after = drawn(&folder);
        for (name, text) in &before {
            assert!(after[name] == *text, "{name} differs");
        }
        assert_eq!(before.len(), after.len());
    }
}

#[test]
fn a_folder_without_results_or_with_damaged_ones_is_refused() {
    let place = solved(RING, 0);
    let folder = place.path().join("x.results");
    let (ended, told) = run(place.path(), &["report", "nowhere"]);
    assert!(ended == 2 && told.contains("nowhere holds no results"), "{told}");
    // The resolved case loses its section's size, the others their end.
    for file in ["fields.vtr", "summary.json", "case.toml", "probes.csv"] {
        let whole = fs::read(folder.join(file)).unwrap();
        let kept = if file == "case.toml" { 60 } else { whole.len() - 40 };
        fs::write(folder.join(file), &whole[..kept]).unwrap();
        fs::remove_file(folder.join("report.html")).ok();
        let (ended, told) = run(place.path(), &["report", "x.results"]);
        assert!(ended == 2 && told.contains(file), "{file}: {told}");
        assert!(!folder.join("report.html").exists(), "{file}");
        fs::write(folder.join(file), whole).unwrap();
    }
    assert_eq!(run(place.path(), &["report", "x.results"]).0, 0);
}

#[test]
fn the_page_says_whether_radiation_is_in_it() {
    let bright = RING.replace("conductivity-y = ", "emissivity = 0.9\nconductivity-y = ");
    let bright =
        bright.replace("{ film = \"8 W/(m2 K)\" }", "{ film = \"8 W/(m2 K)\", emissivity = 0.9 }");
    let place = solved(&bright, 0);
    let page = &drawn(&place.path().join("x.results"))["report.html"];
    assert!(page.contains("Radiation is computed between grey, diffuse surfaces"));
    assert!(!page.contains("Heat by radiation is not counted"));
    assert!(page.contains(">Radiated, W<") && page.contains("radiated through slots"));
}

/// A browser that can work without a screen, if one is installed.
fn browser() -> Option<&'static str> {
    let works = |name: &&str| {
        let version = Command::new(name).arg("--version").stderr(Stdio::null()).output();
        version.is_ok_and(|v| v.status.success())
    };
    ["chromium", "chromium-browser", "google-chrome"].iter().find(|n| works(n)).copied()
}

/// What the browser prints on its two streams for a page.
fn browsed(browser: &str, place: &Path, file: &str, width: u32) -> (String, String) {
    let output = Command::new(browser)
        .args(["--headless", "--no-sandbox", "--disable-gpu", "--enable-logging=stderr"])
        .arg(format!("--user-data-dir={}", place.join("browser").display()))
        .arg(format!("--window-size={width},1200"))
        .args(["--virtual-time-budget=6000", "--dump-dom"])
        .arg(format!("file://{}", place.join(file).display()))
        .output()
        .unwrap();
    assert!(output.status.success(), "{browser}: {}", String::from_utf8_lossy(&output.stderr));
    let text = |bytes: &[u8]| String::from_utf8_lossy(bytes).to_string();
    (text(&output.stdout), text(&output.stderr))
}

/// Measures the page in a frame and tells the frame's parent: texts that leave their drawing or
/// lie on one another, and a page wider than its window.
const MEASURE: &str = "<script>
const found = [];
for (const svg of document.querySelectorAll('svg')) {
  const all = svg.getBoundingClientRect();
  const texts = [...svg.querySelectorAll('text')].map(t => [t.textContent, t.getBoundingClientRect()]);
  for (const [words, r] of texts) {
    if (r.width == 0) found.push('empty: ' + words);
    if (r.left < all.left - 0.5 || r.right > all.right + 0.5 || r.top < all.top - 0.5 || r.bottom > all.bottom + 0.5)
      found.push('off its drawing: ' + words);
  }
  for (let a = 0; a < texts.length; a++) for (let b = a + 1; b < texts.length; b++) {
    const [p, q] = [texts[a][1], texts[b][1]];
    const wide = Math.min(p.right, q.right) - Math.max(p.left, q.left);
    const high = Math.min(p.bottom, q.bottom) - Math.max(p.top, q.top);
    if (wide > 0.5 && high > 0.3 * Math.min(p.height, q.height))
      found.push('on one another: ' + texts[a][0] + ' | ' + texts[b][0]);
  }
}
const page = document.documentElement;
if (page.scrollWidth > window.innerWidth) found.push('wider than the window: ' + page.scrollWidth);
found.push('measured ' + document.querySelectorAll('svg text').length + ' texts at ' + window.innerWidth);
parent.postMessage(found.join('\\n'), '*');
</script>";

/// Wide letters for all drawings.
const WIDE: &str = "<style>svg { font-family: 'DejaVu Sans', Verdana, sans-serif }</style>";

#[test]
fn in_a_browser_nothing_overlaps_runs_off_or_complains() {
    let Some(browser) = browser() else {
        println!("skipped: no chromium found, so nothing is measured in a browser");
        return;
    };
    for (case, code) in [(RING.to_string(), 0), (crowded(), 1)] {
        let place = solved(&case, code);
        fs::copy(place.path().join("x.results/report.html"), place.path().join("page.html"))
            .unwrap();
        for width in [1280, 400] {
            let (_, complaints) = browsed(browser, place.path(), "page.html", width);
            let said: Vec<&str> = complaints.lines().filter(|l| l.contains("CONSOLE")).collect();
            assert!(said.is_empty(), "{said:#?}");
        }
        // The page forbids scripts; a copy of it is measured, in a frame as wide as asked.
        let page = fs::read_to_string(place.path().join("page.html")).unwrap();
        let policy = page.find("<meta http-equiv").unwrap();
        let end = policy + page[policy..].find('>').unwrap() + 1;
        let open = format!("{}{}{MEASURE}", &page[..policy], &page[end..]);
        // The reader's letters may be wide ones: the widest in common use are tried as well.
        for (width, letters) in [(1280, ""), (400, ""), (1280, WIDE), (400, WIDE)] {
            let measured = open.replace("</head>", &format!("{letters}</head>"));
            fs::write(place.path().join("measured.html"), measured).unwrap();
            let outer = format!(
                "<body><pre id=\"told\"></pre><script>onmessage = m => \
                 document.getElementById('told').textContent = m.data;</script><iframe \
                 src=\"measured.html\" style=\"width:{width}px;height:1000px;border:0\"></iframe>"
            );
            fs::write(place.path().join("outer.html"), outer).unwrap();
            let (dom, _) = browsed(browser, place.path(), "outer.html", 1400);
            let told =
                dom.split("<pre id=\"told\">").nth(1).unwrap().split("</pre>").next().unwrap();
            let lines: Vec<&str> = told.lines().collect();
            assert_eq!(lines.len(), 1, "at {width}: {told}");
            assert!(
                lines[0].starts_with("measured ") && lines[0].ends_with(&format!("at {width}")),
                "{told}"
            );
            println!("{}", lines[0]);
        }
    }
}
