package main

import (
	"fmt"
	"strings"
	"testing"
)

// The oracle figures below were computed at 40 digits (mpmath, Newton on the
// likelihood) outside this project and are printed to 15 digits. The claims:
//   - Data Set B (20 payments) and B*, its largest replaced by 3,476: Klugman,
//     Panjer & Willmot, Loss Models, Data Set B (values recalled from memory).
//   - Ten failures and ten units censored at 500: NIST/SEMATECH e-Handbook of
//     Statistical Methods, 8.4.1.3.
//   - Payments under a deductible of 5 and a maximum loss of 25: Loss Data
//     Analytics (2023), Exercise 3.5.7.
//   - Mixed deductibles and limits: a past question of the SOA/CAS Exam C/4
//     (recalled from memory).
var (
	setB     = []float64{27, 82, 115, 126, 155, 161, 243, 294, 340, 384, 457, 680, 855, 877, 974, 1193, 1340, 1884, 2558, 15743}
	setBStar = append(append([]float64{}, setB[:19]...), 3476)
	failures = []float64{54, 187, 216, 240, 244, 335, 361, 373, 375, 386}
)

// presentation is one way in which an insurer may hand over the same claims.
type presentation struct {
	name  string
	file  string
	flags []string
	// used and censored where this presentation has other rows than the oracle.
	used, censored int
}

type oracle struct {
	name                                       string
	shape, scale, loglik, seShape, seScale, cv float64 // cv: covariance of shape and scale
	layer                                      string
	layerCost, q95, tail95                     float64
	used, censored                             int
	weight                                     float64
	forms                                      []presentation
}

// rows writes a header and one line for every loss the function accepts.
func rows(header string, losses []float64, row func(x float64) string) string {
	var b strings.Builder
	b.WriteString(header + "\n")
	for _, x := range losses {
		if line := row(x); line != "" {
			b.WriteString(line + "\n")
		}
	}
	return b.String()
}

func oracles() []oracle {
	above50 := func(format string, less float64) func(float64) string {
		return func(x float64) string {
			if x <= 50 {
				return "" // within the deductible: the insurer never saw it
			}
			return fmt.Sprintf(format, x-less)
		}
	}
	upTo := func(top float64, format string) func(float64) string {
		return func(x float64) string { return fmt.Sprintf(format, min(x, top)) }
	}
	flagged := func(top float64) func(float64) string {
		return func(x float64) string {
			if x >= top {
				return fmt.Sprintf("%v,1", top)
			}
			return fmt.Sprintf("%v,0", x)
		}
	}
	withCensored := append(append([]float64{}, failures...), 500, 500, 500, 500, 500, 500, 500, 500, 500, 500)
	payments := []float64{2, 4, 5, 5, 8, 10, 12, 15, 20, 20}

	return []oracle{
		{
			name: "O1 Data Set B complete", shape: 0.556157797371492, scale: 2561.14362997694, loglik: -162.293403055913,
			seShape: 0.146637068396273, seScale: 1022.59770388176, cv: -99.0201188276197,
			layer: "1000 xs 1000", layerCost: 317.511865510292, q95: 5267.31276671978, tail95: 7541.98411987662,
			used: 20, weight: 20,
			forms: []presentation{
				{name: "amounts alone", file: rows("amount", setB, func(x float64) string { return fmt.Sprint(x) })},
				{name: "another header", file: rows("cost", setB, func(x float64) string { return fmt.Sprint(x) }), flags: []string{"--columns", "amount=cost"}},
				{name: "deductible of nothing", file: rows("amount,deductible", setB, func(x float64) string { return fmt.Sprintf("%v,0", x) }), flags: []string{"--basis", "net"}},
				{name: "another header in continental dress", file: rows("Kosten;Nr", setB, func(x float64) string { return fmt.Sprintf("%v,00;C%v", x, x) }), flags: []string{"--columns", "amount=Kosten"}},
				{name: "limit never reached", file: rows("amount,limit", setB, func(x float64) string { return fmt.Sprintf("%v,20000", x) })},
				{name: "paid and outstanding", file: rows("claim_id,paid,outstanding", setB, func(x float64) string { return fmt.Sprintf("C%v,%v,%v", x, x-7, 7) })},
				{name: "semicolons and decimal commas", file: rows("amount;claim_id", setB, func(x float64) string { return fmt.Sprintf("%v,00;C%v", x, x) })},
			},
		},
		{
			name: "O2 B* above 50", shape: 0.637568937573177, scale: 1142.27178999094, loglik: -145.667442598714,
			seShape: 0.387000420933103, seScale: 589.842723778697, cv: -191.711844085572,
			layer: "1000 xs 1000", layerCost: 153.062743944428, q95: 2563.84324678426, tail95: 3605.62690982701,
			used: 19, weight: 19,
			forms: []presentation{
				{name: "ground-up", file: rows("amount,deductible", setBStar, above50("%v,50", 0)), flags: []string{"--basis", "ground-up"}},
				{name: "net of an ordinary deductible", file: rows("amount,deductible", setBStar, above50("%v,50", 50)), flags: []string{"--basis", "net"}},
				{name: "net of a franchise", file: rows("amount,deductible", setBStar, above50("%v,50", 0)), flags: []string{"--basis", "net", "--deductible-type", "franchise"}},
				{name: "ground-up with a franchise", file: rows("amount,deductible", setBStar, above50("%v,50", 0)), flags: []string{"--deductible-type", "franchise"}},
				{name: "franchise named in the row", file: rows("amount,deductible,deductible_type", setBStar, above50("%v,50,franchise", 0)), flags: []string{"--basis", "net"}},
			},
		},
		{
			name: "O3 B* censored at 1000", shape: 1.03543844430355, scale: 688.211014562866, loglik: -113.641104900252,
			seShape: 0.32947153566259, seScale: 317.803188131884, cv: -87.5861637672703,
			layer: "1000 xs 1000", layerCost: 130.488446627715, q95: 2108.68644995791, tail95: 2802.06386871132,
			used: 20, censored: 5, weight: 20,
			forms: []presentation{
				{name: "flag", file: rows("amount,limit_reached", setBStar, flagged(1000))},
				{name: "limit met by the amount", file: rows("amount,limit", setBStar, upTo(1000, "%v,1000"))},
				{name: "limit below the ground-up loss", file: rows("amount,limit", setBStar, func(x float64) string { return fmt.Sprintf("%v,1000", x) })},
				{name: "top of cover", file: rows("amount,limit", setBStar, upTo(1000, "%v,1000")), flags: []string{"--limit-basis", "top"}},
				{name: "net payments", file: rows("amount,limit", setBStar, upTo(1000, "%v,1000")), flags: []string{"--basis", "net"}},
			},
		},
		{
			name: "O4 failures censored at 500", shape: 2.16839749390983, scale: 266.341418978429, loglik: -75.0690726461836,
			seShape: 0.901787893064293, seScale: 151.274828919917, cv: -128.162476394103,
			layer: "300 xs 200", layerCost: 201.993170431468, q95: 1335.57965466695, tail95: 1654.74966064948,
			used: 20, censored: 10, weight: 20,
			forms: []presentation{
				{name: "flag", file: rows("amount,limit_reached", withCensored, flagged(500))},
				{name: "weights", file: rows("amount,limit_reached,weight", failures, func(x float64) string { return fmt.Sprintf("%v,0,1", x) }) + "500,1,7.5\n500,1,2.5\n", used: 12, censored: 2},
			},
		},
		{
			name: "O5 deductible 5, top of cover 25", shape: 2.79321681403685, scale: 5.55291193054325, loglik: -27.9768487144448,
			seShape: 2.53045675215857, seScale: 4.77238935854346, cv: -11.7057756336021,
			layer: "10 xs 10", layerCost: 4.52402674306459, q95: 33.2307924117788, tail95: 40.3428976726419,
			used: 10, censored: 2, weight: 10,
			forms: []presentation{
				{name: "net, maximum payment", file: rows("amount,deductible,limit", payments, func(x float64) string { return fmt.Sprintf("%v,5,20", x) }), flags: []string{"--basis", "net"}},
				{name: "net, top of cover", file: rows("amount,deductible,limit", payments, func(x float64) string { return fmt.Sprintf("%v,5,25", x) }), flags: []string{"--basis", "net", "--limit-basis", "top"}},
				{name: "ground-up, maximum payment", file: rows("amount,deductible,limit", payments, func(x float64) string { return fmt.Sprintf("%v,5,20", x+5) })},
				{name: "ground-up, top of cover", file: rows("amount,deductible,limit", payments, func(x float64) string { return fmt.Sprintf("%v,5,25", x+5) }), flags: []string{"--limit-basis", "top"}},
				{name: "franchise, maximum payment", file: rows("amount,deductible,limit", payments, func(x float64) string { return fmt.Sprintf("%v,5,25", x+5) }), flags: []string{"--basis", "net", "--deductible-type", "franchise"}},
				{name: "franchise, top of cover", file: rows("amount,deductible,limit", payments, func(x float64) string { return fmt.Sprintf("%v,5,25", x+5) }), flags: []string{"--basis", "net", "--deductible-type", "franchise", "--limit-basis", "top"}},
			},
		},
		{
			name: "O6 mixed deductibles and limits", shape: 0.291513260076571, scale: 24250.3638312512, loglik: -122.543831099799,
			seShape: 0.0991331490671388, seScale: 18655.6759894813, cv: -1220.98955519101,
			layer: "9000 xs 1000", layerCost: 3006.98359497086, q95: 32636.2798250571, tail95: 51724.185729357,
			used: 20, censored: 6, weight: 20,
			forms: []presentation{
				{name: "ground-up, blanks confirmed", file: "amount,deductible,limit\n" + strings.Repeat("750,200,\n", 3) + strings.Repeat("200,0,10000\n", 3) +
					strings.Repeat("300,,20000\n", 4) + strings.Repeat("10000,0,10000\n", 6) + strings.Repeat("400,300,\n", 4),
					flags: []string{"--blank-deductible", "none", "--blank-limit", "none"}},
				{name: "net", file: "amount,deductible,limit\n" + strings.Repeat("550,200,50000\n", 3) + strings.Repeat("200,0,10000\n", 3) +
					strings.Repeat("300,0,20000\n", 4) + strings.Repeat("10000,0,10000\n", 6) + strings.Repeat("100,300,50000\n", 4),
					flags: []string{"--basis", "net"}},
			},
		},
	}
}

func TestFitOracles(t *testing.T) {
	for _, o := range oracles() {
		for _, form := range o.forms {
			used, censored := o.used, o.censored
			if form.used > 0 {
				used, censored = form.used, form.censored
			}
			t.Run(o.name+"/"+form.name, func(t *testing.T) {
				got := answer(t, form.file, append([]string{"fit", "-", "--json"}, form.flags...)...)
				got.is(t, "converged", "status")
				got.is(t, used, "claims", "used")
				got.is(t, censored, "claims", "censored")
				got.is(t, used-censored, "claims", "uncensored")
				got.is(t, 0, "claims", "rejected")
				got.near(t, o.weight, 1e-15, "claims", "weight")
				got.near(t, o.shape, 1e-9, "parameters", "shape")
				got.near(t, o.scale, 1e-9, "parameters", "scale")
				got.near(t, o.shape*o.scale, 1e-9, "mean")
				got.near(t, o.loglik, 1e-12, "log_likelihood")
				got.near(t, o.seShape, 1e-7, "standard_errors", "shape")
				got.near(t, o.seScale, 1e-7, "standard_errors", "scale")
				got.near(t, o.seShape/o.shape, 1e-7, "standard_errors", "ln_shape")
				got.near(t, o.seScale/o.scale, 1e-7, "standard_errors", "ln_scale")
				got.near(t, o.cv/(o.shape*o.scale), 1e-7, "covariance_ln", 0, 1)
				got.near(t, o.cv/(o.shape*o.scale), 1e-7, "covariance_ln", 1, 0)

				figures := answer(t, "", "layers", "--json",
					"--shape", fmt.Sprint(got.number(t, "parameters", "shape")), "--scale", fmt.Sprint(got.number(t, "parameters", "scale")),
					"--layer", o.layer, "--quantile", "0.95")
				figures.near(t, o.layerCost, 1e-8, "layers", 0, "expected_loss")
				figures.near(t, o.q95, 1e-8, "quantiles", 0, "value")
				figures.near(t, o.tail95, 1e-8, "quantiles", 0, "tail_value_at_risk")
			})
		}
	}
}
