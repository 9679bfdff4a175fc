package view

// term is a word of the trade with its meaning, in our own words.
type term struct{ Word, Meaning string }

// terms are those that the pages use.
var terms = []term{
	{"Attachment", "The ground-up amount at which a layer begins."},
	{"Basis", "What the amounts of a batch mean: before or after the deductible, what a limit limits, the currency, the valuation date."},
	{"Batch", "An accepted extract, whole and unchanged, known by the digest of its file."},
	{"Burning figure", "The mean of what claims recorded in a layer, with nothing corrected."},
	{"Case reserve, outstanding", "The claim handler's estimate of what is still to be paid."},
	{"Coefficient of variation", "Standard deviation over mean. Of a gamma curve: 1/√shape."},
	{"Conditional mean of a layer", "E[min(X − A, L) given X > A]: the mean loss to the layer of the losses that reach it."},
	{"Deductible, ordinary", "Only the part of a loss above it is paid; losses below it are not seen."},
	{"Deductible, franchise", "The whole loss is paid once it exceeds it; losses below it are not seen."},
	{"Delta method", "The standard error of a figure from its slope in the parameters and their covariance."},
	{"Gamma curve", "Density x^(α−1) e^(−x/θ) / (Γ(α) θ^α) of a loss x > 0, with shape α and scale θ; mean αθ."},
	{"Ground-up loss", "The full loss before any deductible, limit or share."},
	{"Incurred", "Paid to date plus outstanding."},
	{"Layer, L xs A", "The part of a loss above the attachment A, at most the limit L: min((X − A)+, L)."},
	{"Left truncation", "Losses below a deductible never appear. A claim counts with f(x)/S(d), its density given a loss above its own deductible."},
	{"Limit", "Either the most the insurer pays on a claim, or the top of cover: the ground-up amount at which the payment stops growing."},
	{"Limited expected value", "E[min(X, u)]: the mean of losses capped at u."},
	{"Log-likelihood", "The sum over claims of ln f(x), or of ln S(x) for a claim above its limit, each less ln S(d)."},
	{"Maximum likelihood", "The parameters under which the claims seen are likeliest; a fit here is a proven maximum, or the reason why there is none."},
	{"Newton decrement", "How far a Newton step would still go, in units of the likelihood: near zero at the maximum."},
	{"Observed information", "Minus the second derivatives of the log-likelihood at the maximum; its inverse is the covariance of the parameters."},
	{"Product-limit estimate", "The survival curve that claims themselves give (Kaplan and Meier): a claim is at risk from its deductible up to its loss or limit."},
	{"Profile likelihood", "The likelihood of one parameter with the others at their best for it; its interval need not be symmetric."},
	{"QQ plot", "Observed losses against the losses that the fitted curve puts at the same probability; a good curve keeps to the line of equality."},
	{"Quantile", "The loss that is not exceeded with the stated probability."},
	{"Revision", "One set of assumptions with its results. It never changes; a change of assumptions makes the next one."},
	{"Right censoring", "Of a claim above its limit only a lower bound of the loss is known; it counts with S(x) in place of f(x)."},
	{"Severity", "The amount of one claim, here the ground-up loss."},
	{"Tail value at risk", "The mean of the losses beyond a quantile, here of one claim."},
	{"Valuation date", "The date as of which all amounts of a file stand."},
}
