package deterministic

import (
	"context"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

func benchmarkSurvey(b *testing.B, n *model.Network) {
	states := 0
	for b.Loop() {
		states += len(survey(b, n).States)
	}
	b.ReportMetric(b.Elapsed().Seconds()*1e3/float64(b.N), "ms/survey")
	b.ReportMetric(float64(states)/float64(b.N), "states")
}

func BenchmarkSurveyLatch(b *testing.B)    { benchmarkSurvey(b, zoo.Latch(100)) }
func BenchmarkSurveyOperator(b *testing.B) { benchmarkSurvey(b, zoo.DimerSwitch()) }

func BenchmarkBasinOperator(b *testing.B) {
	m, err := Survey(context.Background(), zoo.DimerSwitch(), Options{})
	if err != nil {
		b.Fatal(err)
	}
	x := []float64{20, 10, 19, 10, 0.25, 0.25, 0.25, 0.25}
	for b.Loop() {
		if _, err := m.Basin(x); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(b.Elapsed().Seconds()*1e3/float64(b.N), "ms/basin")
}
