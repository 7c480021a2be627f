package data

import (
	"bytes"
	"compress/gzip"
	"crypto/sha256"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

const copper = "../../testdata/white-collocott-1984/copper.csv"

func TestReadCopper(t *testing.T) {
	tab, err := Read(copper)
	if err != nil {
		t.Fatal(err)
	}
	// White & Collocott 1984, table 2: first, tenth and last point.
	if tab.Len() != 35 || tab.T[9] != 10 || tab.Cp[9] != 0.0555 || tab.T[34] != 300 || tab.Cp[34] != 24.45 {
		t.Errorf("%d rows, row 10 %v %v, last %v %v", tab.Len(), tab.T[9], tab.Cp[9], tab.T[34], tab.Cp[34])
	}
	if u := float64(tab.U[0]); math.Abs(u-7.43e-6) > 1e-18 {
		t.Errorf("u(Cp) of the first row %g, want 1 %% of 0.000743", u)
	}
	raw, err := os.ReadFile(copper)
	if err != nil {
		t.Fatal(err)
	}
	if want := fmt.Sprintf("%x", sha256.Sum256(raw)); tab.SHA256 != want {
		t.Errorf("SHA-256 %s, want %s", tab.SHA256, want)
	}
	if p := tab.Provenance(); p != "copper.csv, 35 rows, SHA-256 "+tab.SHA256 {
		t.Errorf("provenance %q", p)
	}
	changed, err := tab.ReplaceHeatCapacity(make([]float64, tab.Len()))
	if err != nil || strings.Contains(changed.Provenance(), "SHA-256") {
		t.Errorf("provenance of changed numbers %q, %v", changed.Provenance(), err)
	}
	if M, _, err := tab.Number("M"); err != nil || math.Abs(M-0.063546) > 1e-17 {
		t.Errorf("M = %g, %v", M, err)
	}
	if len(tab.Warnings) != 1 || !strings.Contains(tab.Warnings[0], "1984") {
		t.Errorf("warnings %q, want one about the temperature scale", tab.Warnings)
	}
}

func TestForms(t *testing.T) {
	for _, test := range []struct{ name, text string }{
		{"comma", "T / K, Cp / (J K-1 mol-1), u(Cp) / %\n300, 24.5, 1\n310.5, 24.7, 2\n"},
		{"no blanks, CRLF", "T/K,Cp/(J/(mol K)),u(Cp)/%\r\n300,24.5,1\r\n310.5,24.7,2\r\n"},
		{"semicolon, decimal comma", "T / K; Cp / (J K-1 mol-1); u(Cp) / %\n300;24,5;1\n310,5;24,7;2\n"},
		{"tab", "T / K\tCp / (J K-1 mol-1)\tu(Cp) / %\n300\t24.5\t1\n310.5\t24.7\t2\n"},
		{"white space", "T / K   Cp / (J K-1 mol-1)  u(Cp) / %\n 300   24.5  1\n310.5 24.7 2\n"},
		{"white space, units row", "T   Cp               u(Cp)\nK   (J K-1 mol-1)    %\n300   24.5  1\n310.5 24.7 2\n"},
		{"comma, units row", "T, Cp, u(Cp)\n[K], [J/(mol K)], [%]\n300, 24.5, 1\n310.5, 24.7, 2\n"},
		{"calories", "T / K, Cp / (cal K-1 mol-1), u(Cp) / (J K-1 mol-1)\n300, 5.855640535372849, 0.245\n310.5, 5.903441682600382, 0.494\n"},
		{"celsius", "T / °C, Cp / (J K-1 mol-1), u(Cp) / %\n26.85, 24.5, 1\n37.35, 24.7, 2\n"},
		{"per gram", "# M/(g mol-1): 50\nT / K, Cp / (J K-1 g-1), u(Cp) / %\n300, 0.49, 1\n310.5, 0.494, 2\n"},
		{"coverage", "# coverage of u: k=2\nT / K, Cp / (J K-1 mol-1), u(Cp) / %\n300, 24.5, 2\n310.5, 24.7, 4\n"},
		{"byte-order mark", "\ufeffT / K, Cp / (J K-1 mol-1), u(Cp) / %\n300, 24.5, 1\n310.5, 24.7, 2"},
		{"temperature in words", "Temperature / K, Cp / (J K-1 mol-1), u(Cp) / %\n300, 24.5, 1\n310.5, 24.7, 2"},
		{"notes between rows", "# a remark\nT / K, Cp / (J K-1 mol-1), u(Cp) / %\n# run: 2\n300, 24.5, 1\n\n310.5, 24.7, 2"},
	} {
		t.Run(test.name, func(t *testing.T) {
			tab, err := Parse("x.csv", []byte(test.text))
			if err != nil {
				t.Fatal(err)
			}
			want := [][3]float64{{300, 24.5, 0.245}, {310.5, 24.7, 0.494}}
			for i, w := range want {
				got := [3]float64{float64(tab.T[i]), float64(tab.Cp[i]), float64(tab.U[i])}
				for j := range got {
					if math.Abs(got[j]-w[j]) > 1e-13*w[j] {
						t.Errorf("row %d: %v, want %v", i+1, got, w)
					}
				}
			}
		})
	}
}

// TestEchoShowsConversion: 4.184 must be visible where calories were read.
func TestEchoShowsConversion(t *testing.T) {
	tab, err := Parse("old.csv", []byte("T / K, Cp / (cal K-1 mol-1)\n300, 5.8\n"))
	if err != nil {
		t.Fatal(err)
	}
	if s := tab.View().Data["text/plain"].(string); !strings.Contains(s, "× 4.184") {
		t.Errorf("no 4.184 in\n%s", s)
	}
}

func TestRefusals(t *testing.T) {
	for _, test := range []struct{ name, text, want string }{
		{"no unit", "T / K, Cp\n300, 24.5\n", `line 1, column "Cp": no unit`},
		{"unit in brackets", "T [K], Cp / (J/(mol K))\n300, 24.5\n", `line 1, column "T [K]": no unit; write "T / K"`},
		{"unit in parentheses", "T / K, Cp (J K-1 mol-1)\n300, 24.5\n", `no unit; write "Cp / (J K-1 mol-1)"`},
		{"unknown unit", "T / K, Cp / (J/mol/Kelvin)\n300, 24.5\n", `line 1, column "Cp / (J/mol/Kelvin)"`},
		{"column twice", "T / K, T / K\n300, 300\n", `line 1, column "T": a column of this name is there twice`},
		{"not positive", "T / K, Cp / (J K-1 mol-1)\n300, 24.5\n0, 1\n", `line 3 (row 2), column "T": 0 K is not a positive temperature`},
		{"below absolute zero", "T / °C, Cp / (J K-1 mol-1)\n-280, 1\n", `line 2 (row 1), column "T": -280 °C`},
		{"no number", "T / K, Cp / (J K-1 mol-1)\n300, 24.5x\n", `line 2 (row 1), column "Cp": "24.5x" is not a number`},
		{"not a number by name", "T / K, Cp / (J K-1 mol-1)\n300, NaN\n", `"NaN" is not a number`},
		{"infinite", "T / K, Cp / (J K-1 mol-1)\n300, Inf\n", `"Inf" is not a number`},
		{"empty", "T / K, Cp / (J K-1 mol-1)\n300,\n", `line 2 (row 1), column "Cp": an empty cell`},
		{"negative uncertainty", "T / K, Cp / (J K-1 mol-1), u(Cp) / %\n300, 24.5, -1\n", `line 2 (row 1), column "u(Cp)": -1: an uncertainty is not negative`},
		{"mixed decimals", "T / K; Cp / (J K-1 mol-1)\n300.5; 24,5\n", `decimal points and decimal commas in one file`},
		{"ragged", "T / K, Cp / (J K-1 mol-1)\n300, 24.5, 3\n", `line 2 (row 1): 3 fields, the header has 2`},
		{"decimal comma in a comma file", "T / K, Cp / (J K-1 mol-1)\n300,5, 24,5\n", `a decimal comma needs another separator`},
		{"energy as temperature", "T / cm-1, Cp / (J K-1 mol-1)\n1595, 24.5\n", `column "T": "cm-1" is a unit of wavenumber, and T is a temperature`},
		{"total heat capacity as Cp", "T / K, Cp / (J K-1)\n300, 24.5\n", `the heat capacity of a whole sample is the column C`},
		{"per gram without M", "T / K, Cp / (J K-1 g-1)\n300, 24.5\n", `needs the molar mass`},
		{"uncertainty of nothing", "T / K, u(Cp) / %\n300, 24.5\n", `column "u(Cp)": an uncertainty of "Cp", but there is no such column`},
		{"uncertainty in another unit", "T / K, Cp / (J K-1 mol-1), u(Cp) / K\n300, 24.5, 1\n", `column "u(Cp)": "K" is a unit of temperature`},
		{"whole and part", "T / K, Cp / (J K-1 mol-1), u(Cp) / %, u_c(Cp) / %\n300, 24.5, 1, 1\n", `column "u(Cp)": stands beside u_c(Cp)`},
		{"per cent of Celsius", "T / °C, Cp / (J K-1 mol-1), u(T) / %\n20, 24.5, 1\n", `per cent of a temperature in °C has no meaning`},
		{"coverage", "# coverage of u: two sigma\nT / K, Cp / (J K-1 mol-1), u(Cp) / %\n20, 24.5, 1\n", `coverage of u: "two sigma" is not understood`},
		{"no rows", "T / K, Cp / (J K-1 mol-1)\n", `a header and no rows`},
		{"nothing", "", `no header and no rows`},
		{"latin-1", "T / \xb0C, Cp / (J K-1 mol-1)\n20, 1\n", `line 1: the line is not UTF-8`},
		{"utf-16", "\xff\xfeT\x00", `UTF-16`},
		{"open quote", "name, T / K\n\"a, 3\n", `line 2 (row 1): a quoted field does not end in its line`},
		{"gzip", "\x1f\x8b\x08garbage", `the compressed file is damaged`},
		{"count that is none", "n, T / K\n1.5, 300\n", `line 2 (row 1), column "n": "1.5" is not a whole number`},
	} {
		t.Run(test.name, func(t *testing.T) {
			tab, err := Parse("bad.csv", []byte(test.text))
			if err == nil || tab != nil {
				t.Fatalf("read as %v, want an error", tab)
			}
			if !errors.Is(err, ErrTable) {
				t.Errorf("%v does not match ErrTable", err)
			}
			if s := err.Error(); !strings.HasPrefix(s, "data: bad.csv: ") || !strings.Contains(s, test.want) {
				t.Errorf("got  %s\nwant … %s", s, test.want)
			}
		})
	}
}

func TestWarnings(t *testing.T) {
	for _, test := range []struct{ name, text, want string }{
		{"unsorted", "T / K, Cp / (J K-1 mol-1)\n300, 24\n200, 22\n", "not in increasing order: row 2"},
		{"twice", "T / K, Cp / (J K-1 mol-1)\n300, 24\n300, 22\n", "the first 300 K in rows 1 and 2"},
		{"gap", "T / K, Cp / (J K-1 mol-1)\n10, 1\n11, 2\n12, 3\n30, 4\n31, 5\n", "a gap between 12 K and 30 K"},
		{"mark", "\ufeffT / K, Cp / (J K-1 mol-1)\n300, 24\n", "byte-order mark"},
		{"zero", "T / K, Cp / (J K-1 mol-1), u(Cp) / %\n300, 24, 0\n", "u(Cp) is 0 in 1 rows"},
		{"no uncertainty", "T / K, Cp / (J K-1 mol-1)\n300, 24\n", "no uncertainty of Cp"},
		{"old scale", "# temperature scale: IPTS-68\nT / K, Cp / (J K-1 mol-1)\n300, 24\n", "temperatures are on IPTS-68"},
		{"empty cell", "T / K, x / cm-1\n300, 24\n310,\n", "x: 1 of 2 cells are empty"},
	} {
		t.Run(test.name, func(t *testing.T) {
			tab, err := Parse("odd.csv", []byte(test.text))
			if err != nil {
				t.Fatal(err)
			}
			if all := strings.Join(tab.Warnings, "\n"); !strings.Contains(all, test.want) {
				t.Errorf("warnings\n%s\nwant … %s", all, test.want)
			}
		})
	}
}

func TestCopperHasNoGapWarning(t *testing.T) {
	tab, err := Read(copper)
	if err != nil {
		t.Fatal(err)
	}
	for _, w := range tab.Warnings {
		if strings.Contains(w, "gap") {
			t.Errorf("%s in a table of round temperatures", w)
		}
	}
}

func TestRandomAndCommon(t *testing.T) {
	tab, err := Parse("run.csv", []byte("T / K, Cp / (J K-1 mol-1), u_r(Cp) / %, u_c(Cp) / (J K-1 mol-1), u(T) / mK\n5, 2, 3, 0.08, 4\n"))
	if err != nil {
		t.Fatal(err)
	}
	r, c, u := float64(tab.URandom[0]), float64(tab.UCommon[0]), float64(tab.U[0])
	if math.Abs(r-0.06) > 1e-15 || c != 0.08 || math.Abs(u-0.1) > 1e-15 || math.Abs(float64(tab.UT[0])-0.004) > 1e-17 {
		t.Errorf("random %g, common %g, together %g, u(T) %v", r, c, u, tab.UT[0])
	}
}

func TestTextCountsNotes(t *testing.T) {
	tab, err := Parse("modes.csv", []byte("# substance: X2Y (cr), M/(g mol-1): 150.23, per: mole of formula units\n# source: A. Author, Journal: a title, 12, 3 (1999)\n"+
		"kind, wavenumber / cm-1, g, x / cm-1, treat\nvibration, 1594.75, 1, , harmonic\n\"torsion, methyl\", 225, 1, , replaced-by: scan_CH3.csv\n"))
	if err != nil {
		t.Fatal(err)
	}
	if tab.Note("per") != "mole of formula units" || tab.Note("source") != "A. Author, Journal: a title, 12, 3 (1999)" {
		t.Errorf("notes %q", tab.Notes)
	}
	kind, err := tab.Column("kind")
	if err != nil || kind.Text[1] != "torsion, methyl" {
		t.Errorf("kind %q, %v", kind.Text, err)
	}
	w, err := tab.Column("wavenumber")
	if err != nil || math.Abs(w.Values[0]-159475) > 1e-9 { // in 1/m
		t.Errorf("wavenumber %v, %v", w.Values, err)
	}
	if _, err := tab.Column("Cp"); err == nil || !strings.Contains(err.Error(), `no column "Cp"`) {
		t.Errorf("error %v", err)
	}
}

func TestWriteBack(t *testing.T) {
	dir := t.TempDir()
	for _, name := range []string{"copper.csv", "copper.csv.gz"} {
		tab, err := Read(copper)
		if err != nil {
			t.Fatal(err)
		}
		path := filepath.Join(dir, name)
		if err := tab.Save(path); err != nil {
			t.Fatal(err)
		}
		again, err := Read(path)
		if err != nil {
			t.Fatal(err)
		}
		same(t, tab, again)
		if len(again.Notes) != len(tab.Notes) {
			t.Errorf("%d notes, want %d", len(again.Notes), len(tab.Notes))
		}
	}
}

func same(t *testing.T, a, b *Table) {
	t.Helper()
	if a.Len() != b.Len() || len(a.Columns) != len(b.Columns) {
		t.Fatalf("%d×%d, want %d×%d", b.Len(), len(b.Columns), a.Len(), len(a.Columns))
	}
	for k := range a.Columns {
		x, y := a.Columns[k], b.Columns[k]
		if x.Symbol != y.Symbol || x.Unit.Dim != y.Unit.Dim || x.Unit.Factor != y.Unit.Factor {
			t.Fatalf("column %q %v became %q %v", x.Symbol, x.Unit, y.Symbol, y.Unit)
		}
		for i := range x.Values {
			if x.Values[i] != y.Values[i] {
				t.Fatalf("%s row %d: %v became %v", x.Symbol, i+1, x.Values[i], y.Values[i])
			}
		}
		for i := range x.Text {
			if x.Text[i] != y.Text[i] {
				t.Fatalf("%s row %d: %q became %q", x.Symbol, i+1, x.Text[i], y.Text[i])
			}
		}
	}
}

func FuzzParse(f *testing.F) {
	raw, err := os.ReadFile(copper)
	if err != nil {
		f.Fatal(err)
	}
	f.Add(raw)
	f.Add([]byte("T   Cp               u(Cp)\nK   (J K-1 mol-1)    %\n300   24.5  1\n310.5 24.7 2\n"))
	f.Add([]byte("\ufeff\"a,b\"; T / °C; n\n\"x\"\"y\";3,5;1\n#k: v, w: x\n;4;2\n"))
	f.Add([]byte("# M/(g mol-1): 50, coverage of u: k=2\nT / K, Cp / (J K-1 g-1), u_r(Cp) / %, u_c(Cp)/(J K-1 g-1)\n300, 0.49, 1, 2\n"))
	f.Add([]byte("0 1 }\n1 (1) 1\n0 0 0"))      // a brace in a symbol
	f.Add([]byte("0 2 1 ()\nA ( A A\nA A A A")) // a second row that looks like units
	f.Add([]byte("\v() 1\n1 1\n0 0"))           // a control character
	f.Add([]byte("0(000 0\n1 1\n0 0"))          // an open parenthesis
	var z bytes.Buffer
	w := gzip.NewWriter(&z)
	w.Write(raw)
	w.Close()
	f.Add(z.Bytes())
	f.Fuzz(func(t *testing.T, raw []byte) {
		tab, err := Parse("fuzz", raw)
		if err != nil {
			if tab != nil || !errors.Is(err, ErrTable) {
				t.Fatalf("table %v with error %v", tab, err)
			}
			return
		}
		n := tab.Len()
		if n == 0 {
			t.Fatal("a table without rows")
		}
		for _, c := range tab.Columns {
			if c.len() != n || c.Missing != nil && len(c.Missing) != n {
				t.Fatalf("column %q has %d of %d rows", c.Symbol, c.len(), n)
			}
			for _, v := range c.Values {
				if math.IsNaN(v) || math.IsInf(v, 0) {
					t.Fatalf("column %q holds %v", c.Symbol, v)
				}
			}
		}
		tab.View()
		var b bytes.Buffer
		if err := tab.Write(&b); err != nil {
			t.Fatal(err)
		}
		again, err := Parse("again", b.Bytes())
		if err != nil {
			t.Fatalf("%v\nwritten:\n%s", err, b.String())
		}
		same(t, tab, again)
	})
}
