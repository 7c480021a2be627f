package fit

import (
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"testing"
)

// nistModels are the models of the NIST reference sets, b[0] being b1.
var nistModels = map[string]func(b []float64, x float64) float64{
	"Misra1a": func(b []float64, x float64) float64 { return b[0] * (1 - math.Exp(-b[1]*x)) },
	"Thurber": cubicRatio,
	"Hahn1":   cubicRatio,
	"MGH09": func(b []float64, x float64) float64 {
		return b[0] * (x*x + x*b[1]) / (x*x + x*b[2] + b[3])
	},
	"Eckerle4": func(b []float64, x float64) float64 {
		z := (x - b[2]) / b[1]
		return b[0] / b[1] * math.Exp(-0.5*z*z)
	},
	"Bennett5": func(b []float64, x float64) float64 { return b[0] * math.Pow(b[1]+x, -1/b[2]) },
	"Chwirut2": func(b []float64, x float64) float64 { return math.Exp(-b[0]*x) / (b[1] + b[2]*x) },
	"DanWood":  func(b []float64, x float64) float64 { return b[0] * math.Pow(x, b[1]) },
	"Gauss1": func(b []float64, x float64) float64 {
		s, t := (x-b[3])/b[4], (x-b[6])/b[7]
		return b[0]*math.Exp(-b[1]*x) + b[2]*math.Exp(-s*s) + b[5]*math.Exp(-t*t)
	},
	// From memory, in nist-strd-memory.
	"BoxBOD": func(b []float64, x float64) float64 { return b[0] * (1 - math.Exp(-b[1]*x)) },
	"MGH10":  func(b []float64, x float64) float64 { return b[0] * math.Exp(b[1]/(x+b[2])) },
	"MGH17": func(b []float64, x float64) float64 {
		return b[0] + b[1]*math.Exp(-x*b[3]) + b[2]*math.Exp(-x*b[4])
	},
	"Rat42": func(b []float64, x float64) float64 { return b[0] / (1 + math.Exp(b[1]-b[2]*x)) },
	"Rat43": func(b []float64, x float64) float64 {
		return b[0] / math.Pow(1+math.Exp(b[1]-b[2]*x), 1/b[3])
	},
	"Lanczos3": func(b []float64, x float64) float64 {
		return b[0]*math.Exp(-b[1]*x) + b[2]*math.Exp(-b[3]*x) + b[4]*math.Exp(-b[5]*x)
	},
}

func cubicRatio(b []float64, x float64) float64 {
	return (b[0] + x*(b[1]+x*(b[2]+x*b[3]))) / (1 + x*(b[4]+x*(b[5]+x*b[6])))
}

type nistSet struct {
	x, y                             []float64
	start1, start2, certified, stdev []float64
}

func readNIST(t *testing.T, data, parameters string) map[string]*nistSet {
	t.Helper()
	sets := map[string]*nistSet{}
	get := func(name string) *nistSet {
		if sets[name] == nil {
			sets[name] = &nistSet{}
		}
		return sets[name]
	}
	for _, r := range readCSV(t, data) {
		s := get(r[0])
		s.x, s.y = append(s.x, num(t, r[1])), append(s.y, num(t, r[2]))
	}
	for _, r := range readCSV(t, parameters) {
		s := get(r[0])
		s.start1, s.start2 = append(s.start1, num(t, r[2])), append(s.start2, num(t, r[3]))
		s.certified, s.stdev = append(s.certified, num(t, r[4])), append(s.stdev, num(t, r[5]))
	}
	return sets
}

func readCSV(t *testing.T, name string) [][]string {
	t.Helper()
	f, err := os.Open(name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	r := csv.NewReader(f)
	r.Comment = '#'
	rows, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return rows[1:]
}

func num(t *testing.T, s string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(s, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

func digits(got, want float64) float64 {
	if got == want {
		return 15
	}
	return -math.Log10(math.Abs(got-want) / math.Abs(want))
}

// TestNIST keeps the claim of the package comment: certified parameters to six
// digits and certified standard deviations to four, from both certified starts
// (NIST/ITL Statistical Reference Datasets, nonlinear regression).
func TestNIST(t *testing.T) {
	checkNIST(t, "certified values, NIST StRD", readNIST(t, "testdata/nist-strd/data.csv", "testdata/nist-strd/parameters.csv"))
}

// TestNISTFromMemory: further sets of the family, data and certified values
// from memory.
func TestNISTFromMemory(t *testing.T) {
	checkNIST(t, "certified values, NIST StRD, from memory", readNIST(t, "testdata/nist-strd-memory/data.csv", "testdata/nist-strd-memory/parameters.csv"))
}

func checkNIST(t *testing.T, against string, sets map[string]*nistSet) {
	leastP, leastU := 15.0, 15.0
	defer func() {
		t.Logf("accuracy: Curve, parameters | %d sets, two starts each | relative | %.3g | 1e-6 | %s", len(sets), math.Pow(10, -leastP), against)
		t.Logf("accuracy: Curve, standard uncertainties | %d sets, two starts each | relative | %.3g | 1e-4 | %s", len(sets), math.Pow(10, -leastU), against)
	}()
	for name, set := range sets {
		for k, start := range [][]float64{set.start1, set.start2} {
			t.Run(name+"/"+strconv.Itoa(k+1), func(t *testing.T) {
				b := clone(start)
				ptrs := make([]any, len(b))
				for i := range b {
					ptrs[i] = &b[i]
				}
				model := nistModels[name]
				res, err := Curve(func(x float64) float64 { return model(b, x) }, set.x, set.y, nil, Vary(ptrs...), ScaledSigma)
				if err != nil {
					t.Fatal(err)
				}
				worst, worstU := 15.0, 15.0
				for i, q := range res.Parameters() {
					worst = min(worst, digits(q.Value(), set.certified[i]))
					worstU = min(worstU, digits(q.StandardUncertainty(), set.stdev[i]))
				}
				t.Logf("%.1f digits, standard deviation %.1f, %d evaluations, condition %.1e", worst, worstU, res.Evaluations, res.Condition)
				leastP, leastU = min(leastP, worst), min(leastU, worstU)
				if worst < 6 || worstU < 4 {
					t.Errorf("parameters to %.2f digits, want 6; standard deviations to %.2f, want 4: got %v", worst, worstU, b)
				}
			})
		}
	}
}
