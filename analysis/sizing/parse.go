package sizing

import (
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"

	"holdfast/model"
)

const (
	generationsWord = "generations"
	forms           = `write STATE >= NUMBER UNIT, as in "high >= 1000 generations", or STATE holds NUMBER UNIT with chance P, as in "high holds 200 generations with chance 0.999"`
)

// A parser reads one specification from left to right.
type parser struct {
	text    string
	at      int // bytes read
	network *model.Network
}

func (p *parser) spec(s *Spec) error {
	p.skip()
	s.column = p.column()
	name, err := p.name()
	if err != nil {
		return err
	}
	s.State = name
	switch word := p.relation(); word {
	case ">=", "≥":
		err = p.time(s)
	case "holds":
		err = p.holding(s)
	default:
		return p.wrongRelation(word)
	}
	if err != nil {
		return err
	}
	p.skip()
	if p.at < len(p.text) {
		return p.errorf(p.afterwards(s), "%q is more than a specification takes", p.text[p.at:])
	}
	return nil
}

// afterwards is the hint for what follows a complete specification.
func (p *parser) afterwards(s *Spec) string {
	if p.text[p.at] == '%' {
		return "write a chance as a number between 0 and 1: " + strconv.FormatFloat(s.Chance/100, 'g', 12, 64)
	}
	if strings.HasPrefix(p.text[p.at:], "with") {
		return fmt.Sprintf("a chance is asked of holding: %s holds %s with chance …", s.State, s.length())
	}
	return "give each specification by itself, one --spec each; all of them must hold"
}

// name reads the state's name.
func (p *parser) name() (string, error) {
	p.skip()
	if word := p.word(); word != "" {
		p.at += len(word)
		return word, p.plain(word)
	}
	return "", p.errorf(forms, "the name of a state is missing")
}

// plain refuses words that people may type for Every.
func (p *parser) plain(word string) error {
	switch strings.ToLower(word) {
	case "all", "each", "any", "both":
		p.at -= len(word)
		return p.errorf("to ask it of each state, write "+Every, "%q is no state", word)
	}
	return nil
}

// relation reads the word after the state, or what stands there instead.
func (p *parser) relation() string {
	p.skip()
	rest := p.text[p.at:]
	size := 0
	for size < len(rest) && strings.ContainsRune("<>=≥≤", runeAt(rest[size:])) {
		size += utf8.RuneLen(runeAt(rest[size:]))
	}
	if size == 0 {
		size = len(p.word())
	}
	p.at += size
	return rest[:size]
}

func runeAt(s string) rune {
	r, _ := utf8.DecodeRuneInString(s)
	return r
}

func (p *parser) wrongRelation(word string) error {
	p.at -= len(word)
	hint := forms
	switch word {
	case ">", "=>", "=", "==":
		hint = "a state must hold at least so long: write >="
	case "<", "<=", "≤", "=<":
		hint = "only the least that a state must hold can be asked for: write >="
	case "":
		return p.errorf(forms, "what the state must do is missing")
	}
	return p.errorf(hint, "%q is neither >= nor holds", word)
}

// number matches a number, without a sign.
var number = regexp.MustCompile(`^[0-9.][0-9.]*([eE][+-]?[0-9]+)?`)

// number reads a finite number above 0.
func (p *parser) number(hint string) (float64, error) {
	p.skip()
	text := number.FindString(p.text[p.at:])
	if text == "" {
		if p.at == len(p.text) {
			return 0, p.errorf(hint, "a number is missing")
		}
		return 0, p.errorf(hint, "a number must stand here, not %q", p.shown())
	}
	v, err := strconv.ParseFloat(text, 64)
	if err != nil || !(v > 0) || math.IsInf(v, 0) {
		return 0, p.errorf(hint, "%s is not a finite number above 0", text)
	}
	p.at += len(text)
	return v, nil
}

// time reads a length of time with its unit.
func (p *parser) time(s *Spec) (err error) {
	units := p.units()
	if s.Amount, err = p.number("write how long, as in " + s.State + " >= 1000 " + units[0]); err != nil {
		return err
	}
	p.skip()
	rest := p.text[p.at:]
	for _, unit := range append(units, generationsWord, "generation") {
		after, found := strings.CutPrefix(rest, unit)
		if found && (after == "" || !inWord(runeAt(after))) {
			return p.take(s, unit)
		}
	}
	if rest == "" {
		return p.errorf("write a unit behind the number: "+strings.Join(units, " or "), "the unit of time is missing")
	}
	return p.errorf(model.NameHint(p.word(), units), "%q is no unit of time of this design", p.shown())
}

// units lists the units of time that the design has.
func (p *parser) units() []string {
	var out []string
	if p.network.Generation > 0 {
		out = append(out, generationsWord)
	}
	if p.network.TimeUnit != "" {
		out = append(out, p.network.TimeUnit)
	}
	return out
}

// take sets the time from the unit found.
func (p *parser) take(s *Spec, unit string) error {
	s.Time, s.Unit = s.Amount, unit
	isGeneration := unit == generationsWord || unit == "generation"
	switch g := p.network.Generation; {
	case isGeneration && g > 0:
		s.Time, s.Unit = s.Amount*g, generationsWord
	case isGeneration && unit != p.network.TimeUnit:
		return p.errorf(fmt.Sprintf("add generation = …, its length in %s, to the design, or ask in %s", p.network.TimeUnit, p.network.TimeUnit),
			"the design does not say how long a generation is")
	}
	if math.IsInf(s.Time, 0) {
		return p.errorf("", "so long a time is beyond numbers of double precision")
	}
	p.at += len(unit)
	return nil
}

// holding reads the rest of the form with a chance.
func (p *parser) holding(s *Spec) error {
	if err := p.time(s); err != nil {
		return err
	}
	for _, want := range []string{"with", "chance"} {
		p.skip()
		if word := p.word(); word != want {
			return p.errorf(fmt.Sprintf("write %s holds %s with chance P, P between 0 and 1", s.State, s.length()), "with chance is missing here")
		}
		p.at += len(want)
	}
	p.skip()
	from := p.at
	var err error
	const hint = "write a chance between 0 and 1, as in 0.999"
	if s.Chance, err = p.number(hint); err != nil {
		return err
	}
	if s.Chance >= 1 && !strings.HasPrefix(p.text[p.at:], "%") {
		p.at = from
		return p.errorf(hint, "a chance of %s is none that a switch can be held to", short(s.Chance))
	}
	return nil
}

// word gives what stands at the place up to a blank or a sign.
func (p *parser) word() string {
	rest := p.text[p.at:]
	if end := strings.IndexFunc(rest, func(r rune) bool { return !inWord(r) }); end >= 0 {
		return rest[:end]
	}
	return rest
}

func inWord(r rune) bool { return !unicode.IsSpace(r) && !strings.ContainsRune(`<>=≥≤%,;"`, r) }

// shown is the word at the place, or the sign that stands there.
func (p *parser) shown() string {
	if word := p.word(); word != "" {
		return word
	}
	return string(runeAt(p.text[p.at:]))
}

func (p *parser) skip() {
	p.at += len(p.text[p.at:]) - len(strings.TrimLeftFunc(p.text[p.at:], unicode.IsSpace))
}

func (p *parser) column() int { return utf8.RuneCountInString(p.text[:p.at]) }

// errorf is an error at the place.
func (p *parser) errorf(hint, format string, a ...any) error {
	return &SpecError{p.text, p.column() + 1, fmt.Sprintf(format, a...), hint}
}

// short writes a number in the fewest digits that give it again, plainly from 0.001 to a
// million.
func short(v float64) string {
	if v >= 1e-3 && v < 1e6 || v == 0 {
		return strconv.FormatFloat(v, 'f', -1, 64)
	}
	text := strings.ReplaceAll(strconv.FormatFloat(v, 'e', -1, 64), "e+", "e")
	return strings.Replace(strings.Replace(text, "e0", "e", 1), "e-0", "e-", 1)
}
