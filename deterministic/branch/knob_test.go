package branch

import (
	"context"
	"errors"
	"math"
	"slices"
	"strings"
	"testing"

	"holdfast/internal/zoo"
)

func TestKnobsThatCannotBe(t *testing.T) {
	n := zoo.LeaklessLatch(0.45, 1, 100)
	for _, c := range []struct {
		name      string
		low, high float64
		says      string
	}{
		{"a", 2, 0.2, "the wrong way round; write 0.2:2"},
		{"a", 1, 1, "the range is empty"},
		{"a", -1, 1, "must not go below 0"},
		{"a", math.NaN(), 1, "finite"},
		{"a", 0, math.Inf(1), "finite"},
		{"copies", 0, 100, "copies must stay above 0"},
		{"a*b", 0, 1, "must stay above 0"},
	} {
		_, err := NewKnob(n, c.name, c.low, c.high)
		var wrong *RangeError
		if !errors.As(err, &wrong) || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s from %g to %g gives %v, want *RangeError saying %q", c.name, c.low, c.high, err, c.says)
		}
	}
	for _, name := range []string{"aa", "a*c", "", "total", "a*"} {
		_, err := NewKnob(n, name, 0.1, 1)
		var unknown *UnknownKnobError
		if !errors.As(err, &unknown) || !slices.Contains(unknown.Known, "b") || !slices.Contains(unknown.Known, "copies") {
			t.Errorf("knob %q gives %v, want *UnknownKnobError with the list", name, err)
		}
	}
	for _, c := range []struct{ name, says string }{{"a*a", "a stands in it twice"}, {"a*leak", "leak is 0 today"}} {
		_, err := NewKnob(n, c.name, 0.1, 1)
		var product *ProductError
		if !errors.As(err, &product) || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s gives %v, want *ProductError saying %q", c.name, err, c.says)
		}
	}
}

func TestTodayOutsideTheRange(t *testing.T) {
	n := zoo.LeaklessLatch(0.45, 1, 100)
	k, err := NewKnob(n, "a", 0.5, 2)
	if err != nil {
		t.Fatal(err)
	}
	_, err = Follow(context.Background(), n, k, Options{})
	var outside *OutsideError
	if !errors.As(err, &outside) || outside.Today != 0.45 {
		t.Errorf("error %v, want *OutsideError with today's 0.45", err)
	}
}

func TestFollowStops(t *testing.T) {
	n := zoo.Latch(100)
	k, err := NewKnob(n, "b", 0.2, 2)
	if err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := Follow(ctx, n, k, Options{}); !errors.Is(err, context.Canceled) {
		t.Errorf("a cancelled context gives %v", err)
	}
}

func TestNoStateAnywhere(t *testing.T) {
	s := newSketch(10)
	x := s.species("x", 0)
	s.massAction(s.constant("k", 1), nil, nil, turn{x})
	s.massAction(num(2), nil, turn{x}, turn{x})
	n := s.network(t)
	k, err := NewKnob(n, "k", 0.5, 2)
	if err != nil {
		t.Fatal(err)
	}
	_, err = Follow(context.Background(), n, k, Options{})
	var none *NoStateError
	if !errors.As(err, &none) || none.Unwrap() == nil {
		t.Errorf("growth without bound gives %v, want *NoStateError with its reason", err)
	}
}

func TestTodayOfKnobs(t *testing.T) {
	n := mixed(t)
	want := map[string]float64{"on": 0.3, "off*loss": 0.14, "copies": 20, "total1": 2, "total2": 40}
	for name, v := range want {
		k, err := NewKnob(n, name, 0.01, 100)
		if err != nil {
			t.Fatal(err)
		}
		near(t, name, k.Today(n), v, 1e-15)
	}
}
