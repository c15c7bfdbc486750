using System.Globalization;
using Pipeline.Analysis;
using Pipeline.Comparison;
using Pipeline.Fitting;
using Pipeline.Reduction;
using Pipeline.Reports;

namespace Pipeline.Commands;

/// <summary>What the commands say on the console.</summary>
static class Lines
{
    public static void Shots(BinnedRun run, bool reused)
    {
        int cut = run.Cuts.Sum(c => c.Numbers.Count);
        string why = cut == 0 ? "" : $" ({string.Join(", ", run.Cuts.Select(c => $"{c.Numbers.Count} {c.Reason}"))})";
        Say($"shots: {run.ShotsRead} read, {cut} cut{why}{(reused ? "; reused from an earlier ingest" : "")}");
    }

    public static void Fitted(SpectrumOutcome fit, bool reused)
    {
        Say($"{fit.Signal.Condition}{(reused ? ", reused from an earlier fit" : "")}:");
        Say($"  molecules a shot  {Text(fit.Number, "")}");
        Say($"  mean velocity     {Text(fit.Mean, " m/s")}");
        Say($"  spread            {Text(fit.Spread, " m/s")}");
        Say($"  below {fit.Below.CaptureSpeed:G4} m/s    {Below(fit.Below)}");
    }

    public static void Verdict(RunOutcome outcome)
    {
        Say($"{outcome.Name} {Word(outcome.Verdict.Judgement)}");
        foreach (string reason in outcome.Verdict.Reasons) Say($"  {reason}");
    }

    /// <summary>A row of the night's table.</summary>
    public static void Row(RunOutcome run)
    {
        foreach (ConditionOutcome c in run.Conditions)
            Say($"  {run.Name,-18} {c.Name,-6} {Numbers.WithTotal(c.Fit.Number),-16} {Numbers.WithTotal(c.Fit.Mean),-15} {BelowShort(c.Fit.Below),-16} {Word(run.Verdict.Judgement)}");
    }

    /// <summary>A row for runs that were fitted together.</summary>
    public static void Joint(RunOutcome joint) =>
        Say($"  {joint.Name,-18} {"joint",-6} {Numbers.WithTotal(joint.Conditions[0].Fit.Number),-16} {Numbers.WithTotal(joint.Conditions[0].Fit.Mean),-15} {BelowShort(joint.Conditions[0].Fit.Below),-16} of {joint.Conditions.Count} runs");

    public static string Head => $"  {"run",-18} {"cond.",-6} {"molecules/shot",-16} {"mean m/s",-15} {"below capture",-16} verdict";

    public static string Word(Judgement judgement) => judgement switch
    {
        Judgement.Agrees => "agrees",
        Judgement.Disagrees => "disagrees",
        _ => "is undecided",
    };

    static string Text(Quantity q, string unit) => q.NotDeterminedBecause is { } because ? $"not determined: {because}" : Numbers.WithErrors(q) + unit;

    static string Below(BelowCapture b) => b.NotDeterminedBecause is { } because ? $"not determined: {because}"
        : Format($"{Numbers.Digits(b.Value)}, {100 * b.Interval!.Value.Confidence:G3} % interval {Numbers.Digits(b.Interval.Value.Low)} to {Numbers.Digits(b.Interval.Value.High)} molecules a shot{(b.Strict is { } s ? $"; over all spectra that the signal allows {Numbers.Digits(s.Low)} to {Numbers.Digits(s.High)}" : "")}");

    static string BelowShort(BelowCapture b) => b.Interval is { } i ? $"{Numbers.Digits(i.Low)} to {Numbers.Digits(i.High)}" : "not determined";

    static string Format(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);

    static void Say(FormattableString text) => Console.WriteLine(text.ToString(CultureInfo.InvariantCulture));
}
