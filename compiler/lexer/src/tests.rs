//! Tokens of small texts, and the promise that no byte is lost.

use proptest::prelude::*;

use crate::{Token, is_white, lex};

#[track_caller]
fn check_tokens(text: &str, expected: &[(Token, &str)]) {
    let tokens: Vec<(Token, &str)> = lex(text).into_iter().map(|(token, span)| (token, &text[span.range()])).collect();
    assert_eq!(tokens, expected, "tokens of {text:?}");
}

use Token::*;

#[test]
fn numbers_stop_before_a_range() {
    check_tokens("0..5", &[(Number, "0"), (DotDot, ".."), (Number, "5")]);
    check_tokens("1.5..2", &[(Number, "1.5"), (DotDot, ".."), (Number, "2")]);
    check_tokens("1_450 6.5e3 2e-3", &[(Number, "1_450"), (Number, "6.5e3"), (Number, "2e-3")]);
    check_tokens("3 e", &[(Number, "3"), (Word, "e")]);
    check_tokens("3e+", &[(Number, "3"), (Word, "e"), (Plus, "+")]);
}

#[test]
fn words_hold_letters_beyond_ascii() {
    check_tokens("ω_max maß µm Ω", &[(Word, "ω_max"), (Word, "maß"), (Word, "µm"), (Word, "Ω")]);
}

#[test]
fn multiplication_dot_and_superscripts_are_no_word_characters() {
    check_tokens("kg·m²", &[(Word, "kg"), (MiddleDot, "·"), (Word, "m"), (Superscript, "²")]);
    check_tokens("s⁻¹²", &[(Word, "s"), (Superscript, "⁻¹²")]);
    check_tokens("x⁻", &[(Word, "x"), (Unknown, "⁻")]);
}

#[test]
fn strings_keep_escapes_and_end_with_their_line() {
    check_tokens(r#""a \" b" c"#, &[(Str, r#""a \" b""#), (Word, "c")]);
    check_tokens("\"open # no comment\nx", &[(UnterminatedStr, "\"open # no comment"), (Newline, "\n"), (Word, "x")]);
    check_tokens("\"open\\", &[(UnterminatedStr, "\"open\\")]);
    check_tokens("\"", &[(UnterminatedStr, "\"")]);
}

#[test]
fn a_bar_is_prose_only_as_first_mark_of_a_line() {
    check_tokens("| one\n  | two | three", &[(Prose, "| one"), (Newline, "\n"), (Prose, "| two | three")]);
    check_tokens("a | b", &[(Word, "a"), (Unknown, "|"), (Word, "b")]);
}

#[test]
fn plus_minus_in_ascii_needs_room() {
    check_tokens("5 +/- 1", &[(Number, "5"), (PlusMinus, "+/-"), (Number, "1")]);
    check_tokens("+0.2/-0.0", &[(Plus, "+"), (Number, "0.2"), (Slash, "/"), (Minus, "-"), (Number, "0.0")]);
    check_tokens("a+/-b", &[(Word, "a"), (Plus, "+"), (Slash, "/"), (Minus, "-"), (Word, "b")]);
    check_tokens("±", &[(PlusMinus, "±")]);
}

#[test]
fn all_line_ends_are_newlines_and_others_are_refused() {
    check_tokens("\r\n\r\n\r", &[(Newline, "\r\n"), (Newline, "\r\n"), (Newline, "\r")]);
    check_tokens("# a\u{2028}b", &[(Comment, "# a"), (LineSeparator, "\u{2028}"), (Word, "b")]);
    check_tokens("\u{85}\u{2029}", &[(LineSeparator, "\u{85}"), (LineSeparator, "\u{2029}")]);
}

#[test]
fn comparison_signs_and_arrows() {
    check_tokens(
        "<= ≤ >= ≥ == != -> - >",
        &[
            (LessEqual, "<="),
            (LessEqual, "≤"),
            (GreaterEqual, ">="),
            (GreaterEqual, "≥"),
            (EqualEqual, "=="),
            (NotEqual, "!="),
            (Arrow, "->"),
            (Minus, "-"),
            (Greater, ">"),
        ],
    );
}

#[test]
fn unknown_characters_are_whole() {
    check_tokens("a ; 漢 ´ 🙂", &[(Word, "a"), (Unknown, ";"), (Word, "漢"), (Unknown, "´"), (Unknown, "🙂")]);
}

#[test]
fn byte_order_mark_is_skipped_at_the_start_only() {
    check_tokens("\u{FEFF}x", &[(Word, "x")]);
    check_tokens("x \u{FEFF}", &[(Word, "x"), (Unknown, "\u{FEFF}")]);
    check_tokens("\u{FEFF}| p", &[(Prose, "| p")]);
    check_tokens("\u{FEFF}", &[]);
}

fn check_covered(text: &str) {
    let mut at = if text.starts_with('\u{FEFF}') { 3 } else { 0 };
    for (token, span) in lex(text) {
        let between = &text[at..span.range().start];
        assert!(between.chars().all(is_white), "{between:?} before {token:?} in {text:?}");
        assert!(!span.is_empty(), "empty token in {text:?}");
        if token == Unknown {
            assert_eq!(text[span.range()].chars().count(), 1);
        }
        at = span.range().end;
    }
    assert!(text[at..].chars().all(is_white));
}

proptest! {
    #[test]
    fn every_byte_is_in_a_token_or_blank(text in "\\PC*") {
        check_covered(&text);
    }

    #[test]
    fn every_byte_is_in_a_token_or_blank_near_the_language(
        text in "([ \\t\\r\\n\"\\\\#|+/\\-.0-9eE_a-zµ²⁻·±°≤\u{85}\u{2028}\u{FEFF}\u{A0}{}()=<>!]){0,60}"
    ) {
        check_covered(&text);
    }
}
