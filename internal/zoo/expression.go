package zoo

import "holdfast/model"

// TwoStage is two-stage expression in molecules: transcripts made at kr, lost at
// gr each; protein made at kp a transcript, lost at gp each. TwoStageLaw gives its
// stationary mean and Fano factor.
func TwoStage(kr, gr, kp, gp float64) *model.Network {
	return newBuilder("two-stage expression", "min", 1).
		species("mrna", 0).species("protein", 0).readout("protein").
		constant("kr", kr).constant("gr", gr).constant("kp", kp).constant("gp", gp).
		add(reaction{name: "transcription", makes: counts{"mrna": 1}, k: "kr"}).
		add(reaction{name: "transcript decay", uses: counts{"mrna": 1}, k: "gr"}).
		add(reaction{name: "translation", needs: counts{"mrna": 1}, makes: counts{"protein": 1}, k: "kp"}).
		add(reaction{name: "dilution", uses: counts{"protein": 1}, k: "gp"}).
		network()
}

// TwoStageLaw gives the stationary mean and Fano factor of the protein of
// TwoStage: kr b/gp and 1 + b/(1+η), b = kp/gr, η = gp/gr. Thattai and van
// Oudenaarden, PNAS 98 (2001) 8614 (from memory).
func TwoStageLaw(kr, gr, kp, gp float64) (mean, fano float64) {
	b, eta := kp/gr, gp/gr
	return kr * b / gp, 1 + b/(1+eta)
}

// BurstExpression makes protein in geometric bursts of the given mean at rate k,
// lost at loss each, in molecules. Its stationary law is negative binomial with
// mean k·burst/loss and Fano factor 1 + burst (common practice; by generating
// function, P(n) ∝ Γ(k/loss+n)/n! (burst/(1+burst))ⁿ).
func BurstExpression(k, burst, loss float64) *model.Network {
	return newBuilder("expression in bursts", "min", 1).species("protein", 0).
		constant("k", k).constant("loss", loss).
		add(reaction{name: "burst", burst: map[string]float64{"protein": burst}, k: "k"}).
		add(reaction{name: "dilution", uses: counts{"protein": 1}, k: "loss"}).
		network()
}

// BurstLatch is one species that switches itself on, made in geometric bursts of size·plenty
// molecules in mean at leak + drive x³/(1.5³+x³), lost at loss each: two resting
// states, and a burst mean made of two constants.
func BurstLatch(copies float64) *model.Network {
	g := newBuilder("latch in bursts", "min", copies).species("x", 0).
		constant("leak", 0.03).constant("drive", 0.6).constant("steep", 3).
		constant("size", 2).constant("plenty", 1.2).constant("loss", 0.4)
	law := add(g.c("leak"), mul(g.c("drive"), model.Call(model.OpHill, g.x("x"), num(1.5), g.c("steep"))))
	g.add(reaction{name: "burst", law: law}).add(reaction{name: "loss", uses: counts{"x": 1}, k: "loss"})
	g.draft.Reactions[0].Makes = []model.Term{{Species: 0, Mean: mul(g.c("size"), g.c("plenty"))}}
	return g.network()
}

// Telegraph is a gene that goes on at 4.3 and off at 18.8 and makes transcripts at
// 103.8 while on; transcripts are lost at 1 each. The gene is one copy.
func Telegraph() *model.Network {
	return newBuilder("telegraph", "min", 1).
		fixed("off", 1).fixed("on", 0).species("mrna", 0).readout("mrna").
		constant("up", 4.3).constant("down", 18.8).constant("make", 103.8).constant("loss", 1).
		add(reaction{name: "gene on", uses: counts{"off": 1}, makes: counts{"on": 1}, k: "up"}).
		add(reaction{name: "gene off", uses: counts{"on": 1}, makes: counts{"off": 1}, k: "down"}).
		add(reaction{name: "transcription", needs: counts{"on": 1}, makes: counts{"mrna": 1}, k: "make"}).
		add(reaction{name: "decay", uses: counts{"mrna": 1}, k: "loss"}).
		network()
}

// A TelegraphLaw is what is known of the stationary law of transcripts.
type TelegraphLaw struct{ Mean, Fano, P0, P18 float64 }

// TelegraphStationary gives the stationary law of Telegraph's transcripts:
// P(m) = Γ(κ₊+m)Γ(κ₊+κ₋)/(m! Γ(κ₊+κ₋+m)Γ(κ₊)) rᵐ ₁F₁(κ₊+m; κ₊+κ₋+m; −r), with
// κ₊ = 4.3, κ₋ = 18.8, r = 103.8. Peccoud and Ycart, Theor. Popul. Biol. 48 (1995)
// 222 (published form; numbers computed from it).
func TelegraphStationary() TelegraphLaw {
	return TelegraphLaw{Mean: 19.322078, Fano: 4.505308, P0: 4.5854e-4, P18: 0.0430655}
}

// DimerSwitch is two genes whose dimers bind two overlapping operator sites, one
// operator: 2A⇌A2 (5 n(n−1); 5), 2B⇌B2 likewise; O+A2⇌OA2 (5; 1), O+B2⇌OB2;
// OA2+B2⇌OA2B2⇌OB2+A2 (5; 1); A and B each made at rate 1 from O, A also from OA2,
// B also from OB2, neither from OA2B2; A→∅, B→∅ at 0.3 (monomers only). Molecules.
// Model family: Allen, Warren, ten Wolde, Phys. Rev. Lett. 94 (2005) 018104;
// Morelli et al., Biophys. J. 94 (2008) 3413.
func DimerSwitch() *model.Network {
	g := newBuilder("two genes, dimers, two overlapping operators", "min", 1).
		species("a", 20).species("a2", 0).species("b", 0).species("b2", 0).
		fixed("o", 1).fixed("oa2", 0).fixed("ob2", 0).fixed("oa2b2", 0).readout("b").
		constant("join", 5).constant("part", 5).constant("bind", 5).constant("leave", 1).
		constant("make", 1).constant("loss", 0.3)
	bothWays(g, counts{"a": 2}, counts{"a2": 1}, "join", "part")
	bothWays(g, counts{"b": 2}, counts{"b2": 1}, "join", "part")
	bothWays(g, counts{"o": 1, "a2": 1}, counts{"oa2": 1}, "bind", "leave")
	bothWays(g, counts{"o": 1, "b2": 1}, counts{"ob2": 1}, "bind", "leave")
	bothWays(g, counts{"oa2": 1, "b2": 1}, counts{"oa2b2": 1}, "bind", "leave")
	bothWays(g, counts{"ob2": 1, "a2": 1}, counts{"oa2b2": 1}, "bind", "leave")
	for _, p := range [][2]string{{"o", "a"}, {"o", "b"}, {"oa2", "a"}, {"ob2", "b"}} {
		g.add(reaction{name: p[1] + " from " + p[0], needs: counts{p[0]: 1}, makes: counts{p[1]: 1}, k: "make"})
	}
	return g.
		add(reaction{name: "lose a", uses: counts{"a": 1}, k: "loss"}).
		add(reaction{name: "lose b", uses: counts{"b": 1}, k: "loss"}).
		network()
}

// DimerSwitchFlipRate gives the rate, per unit of time, at which DimerSwitch
// leaves one of its two states (computed from the full master equation, ±0.2 %; no
// published digits at hand).
func DimerSwitchFlipRate() float64 { return 1.2287e-4 }

// bothWays adds left→right at forth and right→left at back, named by their species.
func bothWays(g *builder, left, right counts, forth, back string) {
	l, r := side(g, left), side(g, right)
	g.add(reaction{name: l + " to " + r, uses: left, makes: right, k: forth})
	g.add(reaction{name: r + " to " + l, uses: right, makes: left, k: back})
}

func side(g *builder, c counts) string {
	out := ""
	for _, s := range g.draft.Species {
		if c[s.Name] == 0 {
			continue
		}
		if out != "" {
			out += "+"
		}
		out += s.Name
	}
	return out
}
