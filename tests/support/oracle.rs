//! Reader of tests/oracle/*.txt; tests/oracle/README.md is the description of the format.

use super::report::At;

/// Kinds of tests/oracle/sides.py.
pub const SIDES: [&str; 12] = [
    "warm_2wire",
    "warm_3wire",
    "warm_full",
    "warm_six",
    "own_arms",
    "shunt_full",
    "shunt_3wire",
    "strain_points",
    "transducer_rated",
    "transducer_certificate",
    "transducer_certificate_load",
    "warm_platinum",
];

/// A file of expected values.
#[derive(Debug)]
pub struct Oracle {
    /// Path from the root of the package.
    pub file: String,
    /// What one unit of the `delta` column is.
    pub delta: Delta,
    /// The blocks in order.
    pub blocks: Vec<Block>,
    columns: Vec<String>,
}

/// Unit of the `delta` column.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Delta {
    /// There is no such column.
    None,
    /// The exact inverse is x + delta · unit.
    Absolute(f64),
    /// The exact inverse is x (1 + delta · unit).
    Relative(f64),
}

/// Rows that share their parameters.
#[derive(Debug)]
pub struct Block {
    /// Parameters in the order of the header.
    pub parameters: Vec<(String, f64)>,
    /// The rows.
    pub rows: Vec<Row>,
}

/// One row.
#[derive(Debug)]
pub struct Row {
    /// Line in the file, from 1.
    pub line: usize,
    /// Inputs in the order of the header.
    pub inputs: Vec<f64>,
    /// The exact result, to 17 digits.
    pub value: f64,
    /// Distance of the exact inverse of `value` from the first input, in the unit of the header.
    pub delta: f64,
    /// d value / d (first input).
    pub slope: f64,
    /// d value / d T; NaN where the file has none.
    pub slope_t: f64,
}

impl Block {
    /// A parameter, if the file has it.
    pub fn maybe(&self, name: &str) -> Option<f64> {
        self.parameters.iter().find(|(n, _)| n == name).map(|(_, v)| *v)
    }

    /// A parameter that the file must have.
    pub fn get(&self, name: &str) -> f64 {
        self.maybe(name).unwrap_or_else(|| panic!("no parameter {name}"))
    }

    /// A parameter, or what stands in its place.
    pub fn or(&self, name: &str, otherwise: f64) -> f64 {
        self.maybe(name).unwrap_or(otherwise)
    }
}

/// G. L. Steele, D. Lea, C. H. Flood, Fast splittable pseudorandom number generators, OOPSLA 2014.
#[derive(Clone, Debug)]
pub struct SplitMix64(pub u64);

impl SplitMix64 {
    /// 64 random bits.
    pub fn word(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        z ^ (z >> 31)
    }

    /// In [0, 1), 53 bits.
    pub fn unit(&mut self) -> f64 {
        (self.word() >> 11) as f64 * (1.0 / (1_u64 << 53) as f64)
    }

    /// In [lo, hi).
    pub fn uniform(&mut self, lo: f64, hi: f64) -> f64 {
        lo + (hi - lo) * self.unit()
    }

    /// (1 + u) 2^k with k one of lo ..= hi.
    pub fn octave(&mut self, lo: i32, hi: i32) -> f64 {
        let k = lo + (self.unit() * f64::from(hi - lo + 1)).floor() as i32;
        let power = f64::from_bits(((k + 1023) as u64) << 52); // exact for −1022 ≤ k ≤ 1023
        (1.0 + self.unit()) * power
    }

    /// One value by one rule of a header line.
    fn draw(&mut self, rule: &str, block: usize, known: &[(String, f64)]) -> f64 {
        let words: Vec<_> = rule.split_whitespace().collect();
        let number = |i: usize| words[i].parse::<f64>().unwrap_or_else(|e| panic!("{rule}: {e}"));
        let whole = |i: usize| words[i].parse::<i32>().unwrap_or_else(|e| panic!("{rule}: {e}"));
        let named = |name: &str| known.iter().find(|(n, _)| n == name).unwrap_or_else(|| panic!("{rule}: not drawn")).1;
        match words[0] {
            "uniform" => self.uniform(number(1), number(2)),
            "octave" => self.octave(whole(1), whole(2)),
            "cycle" => number(1 + block % (words.len() - 1)),
            "same" => named(words[1]),
            "minus" => -named(words[1]),
            _ => panic!("unknown rule: {rule}"),
        }
    }
}

impl Oracle {
    /// Reads the file of this kind and draws its inputs.
    pub fn read(kind: &str) -> Self {
        let file = format!("tests/oracle/{kind}.txt");
        let text = super::read(&file);
        let mut seed = 0_u64;
        let (mut rows, mut size) = (0_usize, 0_usize);
        let (mut params, mut inputs, mut points) = (Vec::new(), Vec::new(), Vec::new());
        let (mut every_block, mut null, mut delta, mut columns) = (false, false, Delta::None, Vec::new());
        for line in text.lines().filter_map(|l| l.strip_prefix("#: ")) {
            let (key, rest) = line.split_once(' ').unwrap_or((line, ""));
            let first = rest.split_whitespace().next().unwrap_or("");
            let rule = || rest.split_once(' ').expect("a name and a rule").1;
            match key {
                "kind" => assert_eq!(rest, kind),
                "seed" => seed = rest.parse().expect("a seed"),
                "rows" => rows = rest.parse().expect("a number of rows"),
                "block" => size = rest.parse().expect("a block length"),
                "param" => params.push((first.to_owned(), rule().to_owned())),
                "input" => inputs.push(rule().split('|').map(|r| r.trim().to_owned()).collect::<Vec<_>>()),
                "points" => every_block = rest == "every-block",
                "point" => points.push(numbers(rest)),
                "null" => null = true,
                "delta" => {
                    let unit = rest.split_once(' ').expect("a kind and a unit").1.parse().expect("a unit");
                    delta = if first == "relative" { Delta::Relative(unit) } else { Delta::Absolute(unit) };
                }
                "columns" => columns = rest.split_whitespace().map(str::to_owned).collect(),
                _ => panic!("{file}: unknown header line {line:?}"),
            }
        }
        assert!(rows > 0 && size > 0 && !inputs.is_empty() && !columns.is_empty(), "{file}: header");

        let mut lines = text.lines().enumerate().filter(|(_, l)| !l.starts_with('#')).map(|(i, l)| (i + 1, l));
        let mut stream = SplitMix64(seed);
        let mut blocks = Vec::new();
        for number in 0..rows.div_ceil(size) {
            let mut parameters = Vec::new();
            for (name, rule) in &params {
                let value = stream.draw(rule, number, &parameters);
                parameters.push((name.clone(), value));
            }
            let fixed: &[Vec<f64>] = if number == 0 || every_block { &points } else { &[] };
            let mut block = Block { parameters, rows: Vec::new() };
            for i in 0..size.min(rows - number * size) {
                let (line, text) = lines.next().unwrap_or_else(|| panic!("{file}: rows missing"));
                let (cells, own) = text.split_once(" @ ").map_or((text, None), |(c, own)| (c, Some(own)));
                assert_eq!(own.is_some(), null && i == fixed.len(), "{file}:{line}: own inputs where they belong");
                let x = match (fixed.get(i), own) {
                    (Some(point), _) => point.clone(),
                    (None, Some(own)) => numbers(own),
                    (None, None) => inputs
                        .iter()
                        .map(|rules| stream.draw(&rules[number % rules.len()], number, &block.parameters))
                        .collect(),
                };
                assert_eq!(x.len(), inputs.len(), "{file}:{line}: inputs");
                let cells = numbers(cells);
                assert_eq!(cells.len(), columns.len(), "{file}:{line}: columns");
                let column = |name: &str| columns.iter().position(|c| c == name).map_or(f64::NAN, |i| cells[i]);
                block.rows.push(Row {
                    line,
                    inputs: x,
                    value: column("value"),
                    delta: column("delta"),
                    slope: column("slope"),
                    slope_t: column("slope_t"),
                });
            }
            blocks.push(block);
        }
        assert_eq!(lines.next(), None, "{file}: more rows than the header says");
        Self { file, delta, blocks, columns }
    }

    /// Where a row stands, for the report.
    pub fn at(&self, row: &Row) -> At<'_> {
        At { file: &self.file, line: row.line }
    }

    /// Error of a computed inverse of `value`, free of the rounding of the expected number: got − exact inverse.
    pub fn inverse_error(&self, row: &Row, got: f64) -> f64 {
        let x = row.inputs[0];
        match self.delta {
            // exact while got is within a factor of 2 of x, which every pass is
            Delta::Absolute(unit) => (got - x) - row.delta * unit,
            Delta::Relative(unit) => (got - x) - x * (row.delta * unit),
            Delta::None => f64::NAN,
        }
    }
}

fn numbers(text: &str) -> Vec<f64> {
    text.split_whitespace().map(|w| w.parse().unwrap_or_else(|e| panic!("{w:?}: {e}"))).collect()
}
