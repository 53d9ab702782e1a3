package model

import (
	"errors"
	"strconv"
	"strings"
	"unicode"

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

// tokensOf splits a formula and lists everything in it that is not arithmetic.
func tokensOf(text string) ([]lexer.Token, []lawError) {
	if strings.TrimSpace(text) == "" {
		return nil, []lawError{{0, "the formula is empty", "write a number or a formula such as \"k*x/(half + x)\""}}
	}
	if len(text) > longestFormula {
		return nil, []lawError{{0, "the formula is longer than " + strconv.Itoa(longestFormula) + " bytes", "split the reaction in several"}}
	}
	tokens, err := lexer.Lex(file.NewSource(text))
	if err != nil {
		return nil, []lawError{lexError([]rune(text), err)}
	}
	if len(tokens) > mostTokens {
		return nil, []lawError{{0, "the formula has more than " + strconv.Itoa(mostTokens) + " parts", "split the reaction in several"}}
	}
	return tokens, checkTokens([]rune(text), tokens)
}

// lexError words an error of the tokenizer.
func lexError(text []rune, err error) lawError {
	var place *file.Error
	if !errors.As(err, &place) {
		return lawError{0, "this formula cannot be read", operatorHint}
	}
	at := min(max(place.From, 0), max(len(text)-1, 0))
	switch {
	case strings.Contains(place.Message, "bad number"):
		return lawError{at, "a number runs into a name", "put an operator between them: 2*x"}
	case strings.Contains(place.Message, "unrecognized"):
		return lawError{at, "the character " + strconv.QuoteRune(text[at]) + " has no meaning in a formula", operatorHint}
	}
	return lawError{at, "this has no meaning in a formula", operatorHint}
}

// checkTokens lists what is not of our arithmetic.
func checkTokens(text []rune, tokens []lexer.Token) []lawError {
	var out []lawError
	depth, end := 0, 0
	for i, t := range tokens {
		from := t.From
		if t.Kind == lexer.EOF {
			from = len(text)
		}
		if e := checkGap(text, end, from); e != nil {
			out = append(out, *e)
		}
		if t.Kind == lexer.EOF {
			break
		}
		end = t.To
		depth += nesting(t)
		if e := checkDepth(t, depth); e != nil {
			return append(out, *e)
		}
		if e := checkToken(t, next(tokens, i)); e != nil {
			out = append(out, *e)
		}
	}
	if depth > 0 {
		out = append(out, lawError{end, "a parenthesis is not closed", "put ) where its group ends"})
	}
	return out
}

// nesting is how many parentheses a token opens.
func nesting(t lexer.Token) int {
	switch {
	case t.Is(lexer.Bracket, "("):
		return 1
	case t.Is(lexer.Bracket, ")"):
		return -1
	}
	return 0
}

// checkGap refuses what the tokenizer passed over, which is blanks and comments.
func checkGap(text []rune, from, to int) *lawError {
	for i := from; i < min(to, len(text)); i++ {
		if !unicode.IsSpace(text[i]) {
			return &lawError{i, "comments cannot stand in a formula", "put the comment behind # outside the quotes"}
		}
	}
	return nil
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

// checkToken refuses a token that is not a number, a name, an operator of
// arithmetic, a parenthesis or a comma, and one that follows an operand without
// an operator. after is the token that follows.
func checkToken(t, after lexer.Token) *lawError {
	if e := checkOne(t, after); e != nil {
		return e
	}
	operand := t.Kind == lexer.Number || t.Kind == lexer.Identifier || t.Is(lexer.Bracket, ")")
	begins := after.Kind == lexer.Number || after.Kind == lexer.Identifier || after.Is(lexer.Bracket, "(")
	if !operand || !begins || t.Kind == lexer.Identifier && after.Is(lexer.Bracket, "(") {
		return nil
	}
	return &lawError{after.From, "an operator is missing here", "write * for a product"}
}

func checkOne(t, after lexer.Token) *lawError {
	switch t.Kind {
	case lexer.Number:
		return checkNumber(t)
	case lexer.Identifier:
		if foreignName(t.Value) {
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
func checkNumber(t lexer.Token) *lawError {
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
	return nil
}

// foreignName tells whether the grammar takes a name for a value of its own.
func foreignName(name string) bool {
	return name == "true" || name == "false" || name == "nil"
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
