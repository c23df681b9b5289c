//! The shape of a moment, as `recording.time_format` states it.

use std::format;
use std::string::String;
use std::vec::Vec;

/// A part of a moment as it is written.
#[derive(Clone, Debug, PartialEq)]
pub(crate) enum Token {
    Year,
    Month,
    Day,
    Hour,
    Minute,
    Second,
    Blanks,
    Text(u8),
}

/// How moments are written.
#[derive(Clone, Debug, Default, PartialEq)]
pub(crate) struct Shape(pub(crate) Vec<Token>);

impl Shape {
    const WORDS: [(&'static str, Token); 6] = [
        ("year", Token::Year),
        ("month", Token::Month),
        ("day", Token::Day),
        ("hour", Token::Hour),
        ("minute", Token::Minute),
        ("second", Token::Second),
    ];

    /// Reads a shape such as `day.month.year hour:minute:second`, or says what is wrong with it.
    pub(crate) fn new(text: &str) -> Result<Self, String> {
        let mut tokens: Vec<Token> = Vec::new();
        let mut rest = text.trim().as_bytes();
        'next: while let Some(&byte) = rest.first() {
            for (word, token) in Self::WORDS {
                if let Some(after) = rest.strip_prefix(word.as_bytes()) {
                    if tokens.contains(&token) {
                        return Err(format!("the word {word} stands twice"));
                    }
                    tokens.push(token);
                    rest = after;
                    continue 'next;
                }
            }
            let token = if byte == b' ' { Token::Blanks } else { Token::Text(byte) };
            if !(token == Token::Blanks && tokens.last() == Some(&Token::Blanks)) {
                tokens.push(token);
            }
            rest = rest.get(1..).unwrap_or_default();
        }
        let has = |token| tokens.contains(&token);
        let date = [Token::Year, Token::Month, Token::Day].map(has);
        if date != [true; 3] && date != [false; 3] {
            return Err("a date needs all of year, month and day".into());
        }
        let clock = [Token::Hour, Token::Minute, Token::Second].map(has);
        if !matches!(clock, [false, false, false] | [true, false, false] | [true, true, false] | [true, true, true]) {
            return Err("a clock needs hour, then minute, then second".into());
        }
        if !date.contains(&true) && !clock.contains(&true) {
            return Err("it has none of the words year, month, day, hour, minute and second".into());
        }
        Ok(Self(tokens))
    }
}
