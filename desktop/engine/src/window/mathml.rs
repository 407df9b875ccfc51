//! The core's formulas, which are plain ASCII, as MathML: fractions, powers, roots, subscripts and
//! Greek letters. What is prose, or does not read as a formula, stays text.
//!
//! ```text
//! relation: sum { ("=" | "<" | ">") sum }       sum: product { ("+" | "-") product }
//! product: factor { [ "/" ] factor }            factor: base [ "^" base ]
//! ```
//! A product is juxtaposition. `a b/c` divides `b` alone, `a b / c` the whole product; both are the
//! same number.

use crate::chart::escape;

/// Words that are never symbols: with one of them a formula is prose.
const PROSE: [&str; 16] = [
    "of", "over", "and", "the", "at", "in", "to", "with", "from", "or", "for", "before", "between",
    "since", "no", "is",
];

const GREEK: [(&str, &str); 12] = [
    ("alpha", "α"),
    ("beta", "β"),
    ("gamma", "γ"),
    ("delta", "δ"),
    ("epsilon", "ε"),
    ("zeta", "ζ"),
    ("eta", "η"),
    ("theta", "θ"),
    ("mu", "μ"),
    ("nu", "ν"),
    ("rho", "ρ"),
    ("sigma", "σ"),
];

const MORE_GREEK: [(&str, &str); 3] = [("tau", "τ"), ("phi", "φ"), ("pi", "π")];

/// Names written upright with their argument after them.
const FUNCTIONS: [&str; 6] = ["exp", "ln", "cos", "sin", "min", "max"];

/// A formula as MathML.
#[must_use]
pub fn mathml(formula: &str) -> String {
    let inner = parsed(formula).unwrap_or_else(|| format!("<mtext>{}</mtext>", escape(formula)));
    format!("<math xmlns=\"http://www.w3.org/1998/Math/MathML\">{inner}</math>")
}

/// A symbol as text: Greek letters written out as such.
#[must_use]
pub fn written(symbol: &str) -> String {
    let (head, tail) = symbol.split_once('_').map_or((symbol, ""), |(head, tail)| (head, tail));
    let head = greek(head).map_or_else(|| head.to_owned(), str::to_owned);
    if tail.is_empty() { head } else { format!("{head}_{tail}") }
}

fn greek(name: &str) -> Option<&'static str> {
    let mut all = GREEK.iter().chain(&MORE_GREEK);
    all.find(|(ascii, _)| *ascii == name).map(|(_, letter)| *letter)
}

#[derive(Debug, Clone, PartialEq)]
enum Token<'a> {
    Number(&'a str),
    Name(&'a str),
    /// A sign; whether space stands before it.
    Sign(char, bool),
}

fn parsed(formula: &str) -> Option<String> {
    let (body, remark) = match remark_at(formula) {
        Some(place) => formula.split_at(place),
        None => (formula, ""),
    };
    let tokens = tokens(body)?;
    if tokens.is_empty() || is_prose(&tokens) {
        return None;
    }
    let mut parser = Parser { tokens: &tokens, at: 0 };
    let mut written = parser.relation()?;
    if parser.at != tokens.len() {
        return None;
    }
    if !remark.is_empty() {
        written += &format!("<mtext>{}</mtext>", escape(remark));
    }
    Some(written)
}

/// Where a remark begins: a comma or semicolon outside all brackets.
fn remark_at(formula: &str) -> Option<usize> {
    let mut depth = 0;
    for (place, letter) in formula.char_indices() {
        match letter {
            '(' | '[' => depth += 1,
            ')' | ']' => depth -= 1,
            ',' | ';' if depth == 0 => return Some(place),
            _ => {}
        }
    }
    None
}

fn tokens(text: &str) -> Option<Vec<Token<'_>>> {
    let mut tokens = Vec::new();
    let mut rest = text;
    let mut spaced = false;
    while let Some(first) = rest.chars().next() {
        if first == ' ' {
            rest = &rest[1..];
            spaced = true;
            continue;
        }
        let (token, length) = if first.is_ascii_digit() {
            let length = length_of(rest, |c| c.is_ascii_digit() || c == '.');
            (Token::Number(&rest[..length]), length)
        } else if first.is_ascii_alphabetic() {
            let length = length_of(rest, |c| c.is_ascii_alphanumeric() || c == '_' || c == '\'');
            (Token::Name(&rest[..length]), length)
        } else if "+-*/^=()[]|<>,".contains(first) {
            (Token::Sign(first, spaced), 1)
        } else {
            return None;
        };
        tokens.push(token);
        rest = &rest[length..];
        spaced = false;
    }
    Some(tokens)
}

fn length_of(text: &str, part: impl Fn(char) -> bool) -> usize {
    text.find(|letter| !part(letter)).unwrap_or(text.len())
}

/// A formula has symbols; two words in a row, or a word of grammar, make a sentence.
fn is_prose(tokens: &[Token<'_>]) -> bool {
    let word = |token: &Token<'_>| matches!(token, Token::Name(name) if is_word(name));
    let grammar = |token: &Token<'_>| matches!(token, Token::Name(name) if PROSE.contains(name));
    tokens.iter().any(grammar) || tokens.windows(2).any(|pair| word(&pair[0]) && word(&pair[1]))
}

fn is_word(name: &str) -> bool {
    let known = greek(name).is_some()
        || FUNCTIONS.contains(&name)
        || ["sum", "int", "sqrt"].contains(&name)
        || name.strip_prefix('d').is_some_and(|rest| greek(rest).is_some());
    !known && name.len() >= 4 && name.chars().all(|letter| letter.is_ascii_lowercase())
}

struct Parser<'a> {
    tokens: &'a [Token<'a>],
    at: usize,
}

impl Parser<'_> {
    fn sign(&self) -> Option<char> {
        match self.tokens.get(self.at) {
            Some(Token::Sign(sign, _)) => Some(*sign),
            _ => None,
        }
    }

    fn take(&mut self, wanted: char) -> Option<()> {
        (self.sign() == Some(wanted)).then(|| self.at += 1)
    }

    fn relation(&mut self) -> Option<String> {
        let mut written = self.sum()?;
        while let Some(sign @ ('=' | '<' | '>')) = self.sign() {
            self.at += 1;
            let sign = match (sign, self.sign()) {
                ('<', Some('=')) => "≤",
                ('>', Some('=')) => "≥",
                ('=', _) => "=",
                ('<', _) => "&lt;",
                _ => "&gt;",
            };
            if matches!(sign, "≤" | "≥") {
                self.at += 1;
            }
            written += &format!("<mo>{sign}</mo>{}", self.sum()?);
        }
        Some(written)
    }

    fn sum(&mut self) -> Option<String> {
        let mut written = String::new();
        if self.take('-').is_some() {
            written += "<mo>−</mo>";
        }
        written += &self.product()?;
        while let Some(sign @ ('+' | '-')) = self.sign() {
            self.at += 1;
            let sign = if sign == '+' { '+' } else { '−' };
            written += &format!("<mo>{sign}</mo>{}", self.product()?);
        }
        Some(written)
    }

    fn product(&mut self) -> Option<String> {
        let mut factors = vec![self.factor()?];
        loop {
            match self.tokens.get(self.at) {
                Some(Token::Sign('/', loose)) => {
                    let loose = *loose;
                    self.at += 1;
                    let below = self.factor()?;
                    let above = if loose {
                        factors.drain(..).collect::<String>()
                    } else {
                        factors.pop()?
                    };
                    factors.push(format!(
                        "<mfrac><mrow>{}</mrow><mrow>{}</mrow></mfrac>",
                        bare(&above),
                        bare(&below)
                    ));
                }
                Some(Token::Sign('*', _)) => {
                    self.at += 1;
                    factors.push(format!("<mo>·</mo>{}", self.factor()?));
                }
                Some(Token::Number(_) | Token::Name(_) | Token::Sign('(' | '[', _)) => {
                    factors.push(self.factor()?);
                }
                _ => return Some(factors.concat()),
            }
        }
    }

    fn factor(&mut self) -> Option<String> {
        let base = self.base()?;
        if self.take('^').is_none() {
            return Some(base);
        }
        let power = self.base()?;
        Some(format!("<msup><mrow>{base}</mrow><mrow>{}</mrow></msup>", bare(&power)))
    }

    fn base(&mut self) -> Option<String> {
        let token = self.tokens.get(self.at)?;
        self.at += 1;
        match token {
            Token::Number(number) => Some(format!("<mn>{number}</mn>")),
            Token::Name("sqrt") => {
                let inner = self.base()?;
                Some(format!("<msqrt>{}</msqrt>", bare(&inner)))
            }
            Token::Name(name) => Some(named(name)),
            Token::Sign('(', _) => self.bracket("(", ')'),
            Token::Sign('[', _) => self.bracket("[", ']'),
            Token::Sign('|', _) => self.bracket("|", '|'),
            Token::Sign(..) => None,
        }
    }

    /// What stands in brackets, several parts parted by commas.
    fn bracket(&mut self, open: &str, close: char) -> Option<String> {
        let mut inner = self.relation()?;
        while self.take(',').is_some() {
            inner += &format!("<mo>,</mo>{}", self.relation()?);
        }
        self.take(close)?;
        Some(format!("<mrow><mo>{open}</mo>{inner}<mo>{close}</mo></mrow>"))
    }
}

/// Without the round brackets that a fraction, a root or a power makes needless.
fn bare(written: &str) -> &str {
    let inner = written
        .strip_prefix("<mrow><mo>(</mo>")
        .and_then(|rest| rest.strip_suffix("<mo>)</mo></mrow>"));
    // Only where the two brackets belong together.
    inner.filter(|inner| !inner.contains("<mo>)</mo></mrow>")).unwrap_or(written)
}

/// A symbol or function.
fn named(name: &str) -> String {
    let plain = name.trim_end_matches('\'');
    let primes = "′".repeat(name.len() - plain.len());
    let (head, below) = match plain.split_once('_') {
        Some((head, below)) => (head, below.replace('_', ",")),
        None => split(plain),
    };
    let head = match head {
        "int" => return "<mo>∫</mo>".to_owned(),
        "sum" => return "<mo>∑</mo>".to_owned(),
        _ => letter(head),
    };
    let with_prime =
        if primes.is_empty() { head } else { format!("<msup>{head}<mo>{primes}</mo></msup>") };
    if below.is_empty() {
        return with_prime;
    }
    let digits = below.chars().all(|letter| letter.is_ascii_digit());
    let below = match greek(&below) {
        Some(letter) => format!("<mi>{letter}</mi>"),
        None if digits => format!("<mn>{below}</mn>"),
        None => format!("<mtext>{below}</mtext>"),
    };
    format!("<msub><mrow>{with_prime}</mrow>{below}</msub>")
}

/// `cv` is c with v below it, `u0` u with 0; words, functions and pairs of capitals stay whole.
fn split(name: &str) -> (&str, String) {
    if let Some(digits) = name.strip_prefix("log").filter(|rest| !rest.is_empty()) {
        return ("log", digits.to_owned());
    }
    let mut letters = name.chars();
    letters.next();
    let rest = letters.as_str();
    let short = (1..=3).contains(&rest.len());
    let whole = !short
        || greek(name).is_some()
        || FUNCTIONS.contains(&name)
        || ["int", "sum"].contains(&name)
        || name.starts_with('d')
        || rest.starts_with(|letter: char| letter.is_ascii_uppercase());
    if whole { (name, String::new()) } else { (&name[..1], rest.to_owned()) }
}

fn letter(head: &str) -> String {
    if let Some(letter) = greek(head) {
        return format!("<mi>{letter}</mi>");
    }
    let change = head.strip_prefix('d').filter(|rest| !rest.is_empty());
    match change {
        // An increment of something, or the d of a derivative.
        Some(rest) if greek(rest).is_some() => {
            format!("<mi mathvariant=\"normal\">Δ</mi><mi>{}</mi>", greek(rest).unwrap_or(rest))
        }
        Some(rest) if rest.len() <= 2 => {
            format!("<mi mathvariant=\"normal\">d</mi>{}", named(rest))
        }
        _ => format!("<mi>{head}</mi>"),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn inner(formula: &str) -> String {
        let whole = mathml(formula);
        let start = whole.find('>').unwrap() + 1;
        whole[start..whole.len() - "</math>".len()].to_owned()
    }

    #[test]
    fn subscripts_and_greek_letters() {
        assert_eq!(
            inner("dsigma_z = I_disc q"),
            "<msub><mrow><mi mathvariant=\"normal\">Δ</mi><mi>σ</mi></mrow><mtext>z</mtext></msub>\
             <mo>=</mo><msub><mrow><mi>I</mi></mrow><mtext>disc</mtext></msub><mi>q</mi>"
        );
        assert_eq!(inner("u0"), "<msub><mrow><mi>u</mi></mrow><mn>0</mn></msub>");
        assert_eq!(written("gamma_w"), "γ_w");
        assert_eq!(written("q_liquid"), "q_liquid");
    }

    #[test]
    fn fractions_powers_and_roots() {
        assert_eq!(
            inner("Tv = cv t / H^2"),
            "<msub><mrow><mi>T</mi></mrow><mtext>v</mtext></msub><mo>=</mo><mfrac><mrow>\
             <msub><mrow><mi>c</mi></mrow><mtext>v</mtext></msub><mi>t</mi></mrow><mrow><msup>\
             <mrow><mi>H</mi></mrow><mrow><mn>2</mn></mrow></msup></mrow></mfrac>"
        );
        assert_eq!(
            inner("m du/dt"),
            "<mi>m</mi><mfrac><mrow><mi mathvariant=\"normal\">d</mi><mi>u</mi></mrow><mrow>\
             <mi mathvariant=\"normal\">d</mi><mi>t</mi></mrow></mfrac>"
        );
        assert_eq!(inner("sqrt(a + b)"), "<msqrt><mi>a</mi><mo>+</mo><mi>b</mi></msqrt>");
        assert_eq!(
            inner("(a + b)/(c)"),
            "<mfrac><mrow><mi>a</mi><mo>+</mo><mi>b</mi></mrow><mrow><mi>c</mi></mrow></mfrac>"
        );
    }

    #[test]
    fn a_remark_after_the_formula_stays_text() {
        assert!(inner("C t, 0 before tp").ends_with("<mtext>, 0 before tp</mtext>"));
    }

    #[test]
    fn prose_and_what_does_not_read_stay_text() {
        for formula in [
            "the level in use for the load",
            "sum over tanks, liquid and dead load",
            "a + (b",
            "a ? b",
            "= b",
            "sum of sigma_z",
        ] {
            let found = inner(formula);
            assert_eq!(found, format!("<mtext>{formula}</mtext>"));
        }
        assert_eq!(inner("a < b & c"), "<mtext>a &lt; b &amp; c</mtext>", "escaped");
    }

    /// Every formula of the core's expectation comes out as well-formed MathML.
    #[test]
    fn elements_are_closed_in_order() {
        for formula in [
            "q = gamma_l h + q_floor + q_pad - q_exc",
            "m du/dt = d/dz(k du/dz) - m 8 ch/(De^2 mu) u + m B ds/dt, over the load history",
            "u = u0 + gamma_w s_tip + u_background + u_e",
            "A = int J1(m) J0(m r/R) exp(-m eta z/R) dm",
            "eta = sqrt((1 - 2 nu)/(2 - 2 nu))",
            "100 m / |limit - reference|",
            "[2H - 3(S-a) + (S-a)^2/S] / (2 [H - (S-a)^2/S]), S = sqrt(a^2 + H^2)",
            "RR log10(s/s0) + (CR - RR) log10(p/sp)",
            "max(0.5, 1 - 0.5 s0/q)",
            "sigma_v0' = sigma_v0 - u0",
        ] {
            let whole = mathml(formula);
            assert!(whole.contains("<mi>"), "{formula} is read as a formula: {whole}");
            let mut open: Vec<&str> = Vec::new();
            for tag in whole.split('<').skip(1).map(|part| part.split('>').next().unwrap()) {
                match tag.strip_prefix('/') {
                    Some(name) => assert_eq!(open.pop(), Some(name), "{formula}"),
                    None => open.push(tag.split(' ').next().unwrap()),
                }
            }
            assert!(open.is_empty(), "{formula}");
        }
    }
}
