package model

import (
	"errors"
	"strconv"
	"strings"
	"unicode/utf8"

	"github.com/expr-lang/expr/file"
	"github.com/expr-lang/expr/parser/lexer"
)

// Bounds on a formula: what is nested deeper or is longer is refused before it is
// parsed, so that no input can exhaust the stack.
const (
	deepestNesting = 200
	mostTokens     = 10_000
	longestFormula = 100_000 // bytes
)

// A lawError is what is wrong at one rune of a formula.
type lawError struct {
	rune          int
	message, hint string
}

// operatorHint is what a rate law can be written with.
const operatorHint = "a formula has numbers, species, constants, + - * / ^, parentheses and functions: exp, log, sqrt, min, max, abs, hill, hill_fall"

// tokensOf splits a formula and refuses everything that is not arithmetic.
func tokensOf(text string) ([]lexer.Token, *lawError) {
	if strings.TrimSpace(text) == "" {
		return nil, &lawError{0, "the formula is empty", "write a number or a formula such as \"k*x/(half + x)\""}
	}
	if len(text) > longestFormula {
		return nil, &lawError{0, "the formula is longer than " + strconv.Itoa(longestFormula) + " bytes", "split the reaction in several"}
	}
	tokens, err := lexer.Lex(file.NewSource(text))
	if err != nil {
		return nil, lexError([]rune(text), err)
	}
	if len(tokens) > mostTokens {
		return nil, &lawError{0, "the formula has more than " + strconv.Itoa(mostTokens) + " parts", "split the reaction in several"}
	}
	return tokens, checkTokens([]rune(text), tokens)
}

// lexError words an error of the tokenizer.
func lexError(text []rune, err error) *lawError {
	var place *file.Error
	if !errors.As(err, &place) {
		return &lawError{0, "this formula cannot be read", operatorHint}
	}
	at := min(max(place.From, 0), max(len(text)-1, 0))
	switch {
	case strings.Contains(place.Message, "bad number"):
		return &lawError{at, "a number runs into a name", "put an operator between them: 2*x"}
	case strings.Contains(place.Message, "unrecognized"):
		return &lawError{at, "the character " + strconv.QuoteRune(text[at]) + " has no meaning in a formula", operatorHint}
	}
	return &lawError{at, "this has no meaning in a formula", operatorHint}
}

// checkTokens refuses the first token that is not of our arithmetic.
func checkTokens(text []rune, tokens []lexer.Token) *lawError {
	depth, end := 0, 0
	for i, t := range tokens {
		if gap := strings.TrimSpace(string(text[end:min(max(t.From, end), len(text))])); gap != "" && t.Kind != lexer.EOF {
			return &lawError{end + leadingBlanks(text[end:]), "comments cannot stand in a formula", "put the comment behind # outside the quotes"}
		}
		if e := checkToken(t, next(tokens, i)); e != nil {
			return e
		}
		if t.Is(lexer.Bracket, "(") {
			depth++
		}
		if t.Is(lexer.Bracket, ")") {
			depth--
		}
		if e := checkDepth(t, depth); e != nil {
			return e
		}
		if t.Kind != lexer.EOF {
			end = t.To
		}
	}
	return checkEnd(text, end, depth)
}

func leadingBlanks(text []rune) int {
	s := string(text)
	return utf8.RuneCountInString(s) - utf8.RuneCountInString(strings.TrimLeft(s, " \t\r\n"))
}

func next(tokens []lexer.Token, i int) lexer.Token {
	if i+1 < len(tokens) {
		return tokens[i+1]
	}
	return lexer.Token{Kind: lexer.EOF}
}

func checkDepth(t lexer.Token, depth int) *lawError {
	if depth < 0 {
		return &lawError{t.From, "this parenthesis closes nothing", "leave it out, or open one before it"}
	}
	if depth > deepestNesting {
		return &lawError{t.From, "parentheses are nested deeper than " + strconv.Itoa(deepestNesting), "write the formula flatter"}
	}
	return nil
}

func checkEnd(text []rune, end, depth int) *lawError {
	if strings.TrimSpace(string(text[end:])) != "" {
		return &lawError{end + leadingBlanks(text[end:]), "comments cannot stand in a formula", "put the comment behind # outside the quotes"}
	}
	if depth > 0 {
		return &lawError{end, "a parenthesis is not closed", "put ) where its group ends"}
	}
	return nil
}

// checkToken refuses a token that is not a number, a name, an operator of
// arithmetic, a parenthesis or a comma. after is the token that follows.
func checkToken(t, after lexer.Token) *lawError {
	switch t.Kind {
	case lexer.EOF:
		return nil
	case lexer.Number:
		return checkNumber(t, after)
	case lexer.Identifier:
		if strings.Contains(t.Value, "$") {
			return &lawError{t.From, strconv.Quote(t.Value) + " is not a name", "a name has letters, digits and _ only"}
		}
		if t.Value == "true" || t.Value == "false" || t.Value == "nil" {
			return foreign(t)
		}
		return nil
	case lexer.Bracket:
		if t.Value == "(" || t.Value == ")" {
			return nil
		}
	case lexer.Operator:
		if len(t.Value) == 1 && strings.Contains("+-*/^", t.Value) {
			return nil
		}
		if t.Value == "," {
			return checkComma(t, after)
		}
	}
	return foreign(t)
}

func checkComma(t, after lexer.Token) *lawError {
	if after.Is(lexer.Bracket, ")") || after.Is(lexer.Operator, ",") {
		return &lawError{t.From, "an argument is missing after this comma", "leave the comma out, or put the argument in"}
	}
	return nil
}

// checkNumber takes plain decimal numbers only.
func checkNumber(t, after lexer.Token) *lawError {
	if strings.Trim(t.Value, "0123456789.eE+-") != "" {
		return &lawError{t.From, "the number " + t.Value + " is not written plainly", "write it in decimal digits, such as 1000 or 1e3"}
	}
	if v, err := strconv.ParseFloat(t.Value, 64); err != nil || v != v {
		return &lawError{t.From, "the number " + t.Value + " cannot be read or is too large", "the largest number is about 1.8e308"}
	}
	if !strings.ContainsAny(t.Value, ".eE") {
		if _, err := strconv.ParseInt(t.Value, 10, 64); err != nil {
			return &lawError{t.From, "the whole number " + t.Value + " is too long", "write it with an exponent, such as 1e20"}
		}
	}
	if after.Kind == lexer.Identifier || after.Kind == lexer.Number || after.Is(lexer.Bracket, "(") {
		return &lawError{after.From, "an operator is missing here", "write * for a product"}
	}
	return nil
}

// foreign words the refusal of what the tokenizer knows and a rate law does not.
func foreign(t lexer.Token) *lawError {
	switch t.Value {
	case "**":
		return &lawError{t.From, "** is not an operator here", "write ^ for a power"}
	case "%":
		return &lawError{t.From, "% is not an operator here", "rate laws have no remainder; write x/100 for per cent"}
	case "<", ">", "<=", ">=", "==", "!=", "?", ":", "??", "if", "else":
		return &lawError{t.From, t.Value + " cannot stand in a formula: rate laws have no comparisons and no cases", "use min, max or a steep hill(x, half, n)"}
	}
	if t.Kind == lexer.String || t.Kind == lexer.Bytes {
		return &lawError{t.From, "a text in quotes cannot stand in a formula", "write the species' or constant's name without quotes"}
	}
	return &lawError{t.From, strconv.Quote(t.Value) + " cannot stand in a formula", operatorHint}
}
