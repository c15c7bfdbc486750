using System.Globalization;
using Pipeline.Analysis;
using Pipeline.Comparison;
using Pipeline.Fitting;
using Pipeline.Quantities;

namespace Pipeline.Reports;

/// <summary>report.html of one run.</summary>
public static class RunPage
{
    public static string Render(RunOutcome run) => Page.Render($"Run {run.Name}: {Words.Of(run.Verdict.Judgement)}", Html.Of($"""
        <h1>Run {run.Name}</h1>
        {VerdictBox(run.Verdict)}
        {ShotLine(run.Tally)}
        {run.Remarks.Select(r => Html.Of($"<p class=\"note\">Note: {r}.</p>"))}
        {run.Conditions.Select(Section)}
        {QuestionTable(run.Verdict)}
        {ProvenanceList(run.Provenance)}
        """));

    static Markup VerdictBox(Verdict verdict) => Html.Of($"""
        <div class="verdict {Words.Of(verdict.Judgement)}"><p><strong>{VerdictLine(verdict.Judgement)}</strong></p>
        {verdict.Reasons.Select(r => Html.Of($"<p>{r}.</p>"))}</div>
        """);

    static string VerdictLine(Judgement judgement) => judgement switch
    {
        Judgement.Agrees => "Agrees with the prediction.",
        Judgement.Disagrees => "Disagrees with the prediction.",
        _ => "Undecided.",
    };

    static Markup ShotLine(ShotTally tally)
    {
        string kept = string.Join("; ", tally.Kept.GroupBy(k => k.Condition, StringComparer.Ordinal)
            .Select(g => $"{g.Key}: {string.Join(", ", g.Select(k => $"{k.Shots} {Words.Of(k.Kind)}"))}"));
        string cuts = tally.Cuts.Count == 0 ? "none cut"
            : string.Join("; ", tally.Cuts.Select(c => $"{c.Numbers.Count} cut for {c.Reason} (shot {string.Join(", ", c.Numbers.Take(12))}{(c.Numbers.Count > 12 ? ", ..." : "")})"));
        return Html.Of($"<p>{tally.Read} shots read; {cuts}. Kept: {kept}.</p>");
    }

    static Markup Section(ConditionOutcome c) => Html.Of($"""
        <h2>Condition {c.Name}</h2>
        {NumbersTable(c)}
        {Doubts(c.Fit)}
        <h3>Signal</h3>
        {ConditionFigures.Key(SignalKey(c))}
        {ConditionFigures.Signal(c)}
        {SpectrumPart(c)}
        {ShapeTables.Of(c.Fit)}
        {Budget(c.Fit)}
        """);

    static (string, string)[] SignalKey(ConditionOutcome c) =>
    [
        ("point", "measured, background subtracted"),
        .. c.Fit.Fitted is not null ? [("fit", "fitted lines")] : c.Fit.Spectra.Count > 0 ? [("fit", "fitted spectrum, folded back")] : Array.Empty<(string, string)>(),
        .. c.Prediction is not null ? [("prediction", c.RelativeOnly ? "prediction (its number is not stated)" : "prediction, folded through the instrument"), ("simulated", "its simulation statistics")] : Array.Empty<(string, string)>(),
    ];

    static Markup NumbersTable(ConditionOutcome c) => Html.Of($"""
        <div class="scroll"><table><tr><th>quantity</th><th>measured</th><th>predicted</th></tr>
        {(c.Fit.Spectra.Count == 0 && c.Fit.Others.Count > 0 ? Markup.None : MainRows(c))}
        {c.Fit.Others.Select(Shown).Select(o => Row(o.Name, o.Quantity, " " + o.Unit, null))}
        </table></div>
        """);

    static Markup MainRows(ConditionOutcome c) => Html.Of($"""
        {Row("molecules per shot", c.Fit.Number, "", c.RelativeOnly ? null : c.Prediction?.Molecules)}
        {Row("mean velocity", c.Fit.Mean, " m/s", c.Prediction?.MeanSpeed)}
        {Row("velocity spread", c.Fit.Spread, " m/s", null)}
        <tr><td>molecules per shot below {Numbers.Digits(c.Fit.Below.CaptureSpeed)} m/s</td><td>{BelowText(c.Fit.Below)}</td><td>{Predicted(c.RelativeOnly ? null : c.Prediction?.BelowCapture, "")}</td></tr>
        """);

    /// <summary>In the unit that people use.</summary>
    static NamedQuantity Shown(NamedQuantity q) => q.Unit switch
    {
        "Hz" => q with { Unit = "MHz", Quantity = q.Quantity.Times(1e-6) },
        "K" when !(q.Quantity.Value >= 1) => q with { Unit = "mK", Quantity = q.Quantity.Times(1e3) },
        "s" => q with { Unit = "ms", Quantity = q.Quantity.Times(1e3) },
        "rad" => q with { Unit = "mrad", Quantity = q.Quantity.Times(1e3) },
        _ => q,
    };

    static Markup Row(string name, Quantity q, string unit, double? predicted) => Html.Of(
        $"<tr><td>{name}</td><td>{(q.NotDeterminedBecause is { } because ? $"not determined, because {because}" : Numbers.WithErrors(q) + unit)}</td><td>{Predicted(predicted, unit)}</td></tr>");

    static string Predicted(double? value, string unit) => value is { } v ? Numbers.Digits(v, 4) + unit : "";

    static string BelowText(BelowCapture b) => b.NotDeterminedBecause is { } because ? $"not determined, because {because}"
        : string.Create(CultureInfo.InvariantCulture,
            $"{Numbers.Digits(b.Interval!.Value.Low)} to {Numbers.Digits(b.Interval.Value.High)} with {100 * b.Interval.Value.Confidence:G3} % confidence (estimate {Numbers.Digits(b.Value)}; {b.Rule}){ShareText(b.Share)}{StrictText(b.Strict)}");

    static string ShareText(Interval? share) => share is { } s ? $"; {Numbers.Digits(100 * s.Low)} to {Numbers.Digits(100 * s.High)} % of all molecules" : "";

    static string StrictText(Interval? strict) => strict is { } s ? $"; {Numbers.Digits(s.Low)} to {Numbers.Digits(s.High)} over every non-negative spectrum that the signal allows" : "";

    static Markup Doubts(SpectrumOutcome fit) => Markup.Join(fit.Spectra.Select(s => Html.Of(
        $"<p class=\"note\">{(s == fit.Spectra[0] ? "Quoted" : "Beside it")}: {s.Estimator}, {s.Description}{(double.IsFinite(s.Deviance) ? $"; deviance {Numbers.Digits(s.Deviance)} for {Numbers.Digits(s.DegreesOfFreedom)} degrees of freedom" : "")}{(s.Doubt is { } d ? $". Doubt: {d}" : "")}.</p>")));

    static Markup SpectrumPart(ConditionOutcome c)
    {
        if (c.Fit.Spectra.Count == 0) return Html.Of($"<p>No velocity spectrum: {c.Fit.NotDeterminedBecause}.</p>");
        (string, string)[] key =
        [
            ("fit", $"{c.Fit.Spectra[0].Estimator} spectrum"), ("inner", "statistical"), ("outer", "statistical and systematic"),
            .. c.Fit.Spectra.Count > 1 ? [("other", string.Join(" and ", c.Fit.Spectra.Skip(1).Select(s => s.Estimator)))] : Array.Empty<(string, string)>(),
            .. c.Prediction is not null && c.Fit.Spectra[0].Resolution is not null ? [("prediction", "prediction, as this estimator would see it")] : Array.Empty<(string, string)>(),
        ];
        return Html.Of($"<h3>Velocity spectrum</h3>{ConditionFigures.Key(key)}{ConditionFigures.Spectrum(c, c.Fit.Below.CaptureSpeed)}");
    }

    static Markup Budget(SpectrumOutcome fit)
    {
        if (fit.Spectra.Count == 0 || fit.Number.Budget.Count == 0) return Markup.None;
        IEnumerable<Markup> rows = fit.Number.Budget.OrderByDescending(b => Math.Abs(b.Shift)).Select(b => Html.Of(
            $"<tr><td>{b.Cause}</td><td class=\"n\">{Numbers.Decimal(100 * b.Shift / fit.Number.Value, 2)}</td><td class=\"n\">{MeanShift(fit, b.Cause)}</td></tr>"));
        return Html.Of($"<h3>Systematic budget: what one standard deviation of each cause moves</h3><div class=\"scroll\"><table><tr><th>cause</th><th class=\"n\">number (%)</th><th class=\"n\">mean velocity (m/s)</th></tr>{rows}</table></div>");
    }

    static string MeanShift(SpectrumOutcome fit, string cause) =>
        fit.Mean.Budget.FirstOrDefault(b => b.Cause == cause) is { } line ? Numbers.Decimal(line.Shift, 3) : "–";

    static Markup QuestionTable(Verdict verdict)
    {
        if (verdict.Questions.Count == 0) return Markup.None;
        IEnumerable<Markup> rows = verdict.Questions.Select(q => Html.Of($"""
            <tr><td>{q.Answer.Condition}, {q.Answer.Question}</td><td class="n">{Numbers.Digits(q.Answer.Measured, 4)}</td><td class="n">{Numbers.Digits(q.Answer.Predicted, 4)}</td>
            <td class="n">{Numbers.Digits(q.Answer.Statistical, 2)}</td><td class="n">{Numbers.Digits(q.Answer.Systematic, 2)}</td><td class="n">{Numbers.Digits(q.Answer.Simulation, 2)}</td>
            <td class="n">{Numbers.Digits(q.AdjustedPValue, 2)}</td><td>{Words.Of(q.Judgement)}</td></tr>
            """));
        return Html.Of($"""
            <h2>Questions asked of data and prediction</h2>
            <div class="scroll"><table><tr><th>question</th><th class="n">measured</th><th class="n">predicted</th><th class="n">statistical</th><th class="n">systematic</th><th class="n">simulation</th><th class="n">p (Holm)</th><th>judgement</th></tr>{rows}</table></div>
            <p class="note">Rate, arrival time and velocity are ratios of measured to predicted; shape is chi-square, beside its degrees of freedom.</p>
            """);
    }

    static Markup ProvenanceList(Provenance p) => Html.Of($"""
        <h2>Made from</h2>
        <div class="scroll"><table>
        {p.Inputs.Concat(p.Predictions).Select(f => Html.Of($"<tr><td>{f.Name}</td><td><code>{f.Sha256}</code></td></tr>"))}
        <tr><td>configuration</td><td><code>{p.Configuration}</code></td></tr>
        <tr><td>program</td><td>{p.Program}, numerical version {p.NumericalVersion}, seed {p.Seed}; read with {p.Reader}</td></tr>
        </table></div>
        """);
}
