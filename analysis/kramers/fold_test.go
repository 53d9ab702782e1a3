package kramers_test

import (
	"context"
	"errors"
	"math"
	"path/filepath"
	"testing"

	"holdfast/analysis/kramers"
	"holdfast/deterministic/branch"
	"holdfast/internal/zoo"
	"holdfast/model"
)

func design(t testing.TB, name string) *model.Draft {
	t.Helper()
	d, err := model.Load(filepath.Join("..", "..", "testdata", "designs", name+".toml"))
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func bind(t testing.TB, d *model.Draft, copies float64, set map[string]float64) *model.Network {
	t.Helper()
	n, err := d.Bind(copies, set)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// folds lists the folds of a network as a constant is turned.
func folds(t testing.TB, n *model.Network, knob string, low, high float64) []branch.Mark {
	t.Helper()
	k, err := branch.NewKnob(n, knob, low, high)
	if err != nil {
		t.Fatal(err)
	}
	d, err := branch.Follow(context.Background(), n, k, branch.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return d.Folds()
}

// The latch without leak, b = k = 1, by hand (algebra): the fold at a = 1/2 has protein
// 1 and mrna 1/2, J = (−1 1/2; 1 −1/2), r = (1, 2), l = (1, 1)/3, ∂F/∂a = (0, −1), so α = −1/3;
// the law's second derivative is −1/2, so l·F″rr = −2/3 and β = −1/3: a drive of 1/9. All four
// rates are 1/2 and all l·ν ±1/3: D = 1/9 over the copies, and β²D = 1/81 over the copies.
func TestLatchFoldByHand(t *testing.T) {
	const copies = 40
	d := design(t, "latch")
	marks := folds(t, bind(t, d, copies, map[string]float64{"leak": 0}), "a", 0.3, 0.6)
	if len(marks) != 1 || math.Abs(marks[0].Knob-0.5) > 1e-9 {
		t.Fatalf("folds %+v, want one at 0.5", marks)
	}
	f, err := kramers.AtFold(bind(t, d, copies, map[string]float64{"leak": 0, "a": 0.5}), marks[0])
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(f.Drive-1/9.) > 1e-8 || math.Abs(f.Noise*copies-1/81.) > 1e-9 {
		t.Errorf("drive %v, noise times copies %v; want %v and %v", f.Drive, f.Noise*copies, 1/9., 1/81.)
	}
	if got, want := f.SlowRate(0.04), 2/3.*0.2; math.Abs(got-want) > 1e-8 {
		t.Errorf("slow rate %v, want %v", got, want)
	}
}

// A burst of mean m adds its own variance: with births of rate v in bursts the noise of
// the death-and-burst switch is ½((m² + m(1+m))v + loss), by hand. Here a geometric burst of mean 3 makes
// a third as often what single births make; the drive stays and the noise is (3·3 + 3·4)/3 = 7 times
// that of the births, 1 that of the deaths, which are as many: 4 times in all.
func TestBurstsAddNoise(t *testing.T) {
	noise := func(burst float64) kramers.Fold {
		rate := model.Call(model.OpMul, model.Number(1/burst), model.Call(model.OpAdd, model.Number(0.03), model.Call(model.OpHill, model.SpeciesRef(0), model.Number(1), model.Number(2))))
		makes := model.Term{Species: 0, Burst: burst}
		if burst == 1 {
			makes = model.Term{Species: 0, Count: 1}
		}
		d := model.Draft{
			Copies: 50, Species: []model.Species{{Name: "x"}}, Constants: []model.Constant{{Name: "loss", Value: 0.48}},
			Reactions: []model.DraftReaction{
				{Name: "make", Rate: rate, Makes: []model.Term{makes}},
				{Name: "lose", MassAction: model.ConstantRef(0), Uses: []model.Term{{Species: 0, Count: 1}}},
			},
		}
		marks := folds(t, bind(t, &d, 0, nil), "loss", 0.45, 0.7)
		if len(marks) != 1 {
			t.Fatalf("%d folds, want 1", len(marks))
		}
		f, err := kramers.AtFold(bind(t, &d, 0, map[string]float64{"loss": marks[0].Knob}), marks[0])
		if err != nil {
			t.Fatal(err)
		}
		return f
	}
	single, burst := noise(1), noise(3)
	if math.Abs(burst.Noise/single.Noise-4) > 1e-6 || math.Abs(burst.Drive/single.Drive-1) > 1e-6 {
		t.Errorf("noise %v and drive %v times those of single births; want 4 and 1", burst.Noise/single.Noise, burst.Drive/single.Drive)
	}
}

// The pair of genes with equal constants meets a pitchfork, which is no fold.
func TestPitchforkIsRefused(t *testing.T) {
	n := zoo.SymmetricRepression(3, 50)
	_, err := kramers.AtFold(n, branch.Mark{Kind: branch.Pitchfork, Amounts: []float64{1, 1}})
	var kind *kramers.KindError
	if !errors.As(err, &kind) {
		t.Errorf("got %v, want a KindError", err)
	}
}
