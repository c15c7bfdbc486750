using System.Globalization;
using System.Text;
using Pipeline.Analysis;
using Pipeline.Fitting;

namespace Pipeline.Reports;

/// <summary>night.csv: one row a run and condition, one a run that failed.</summary>
public static class NightTable
{
    const string Header = "run,condition,judgement,molecules_per_shot,molecules_statistical,molecules_systematic,mean_velocity_m_per_s,mean_statistical,mean_systematic,"
        + "spread_m_per_s,spread_statistical,spread_systematic,capture_m_per_s,below_capture_low,below_capture_high,below_capture_confidence,shots_read,shots_cut,fault\n";

    public static string Render(NightOutcome night)
    {
        var text = new StringBuilder(Header);
        foreach (RunOutcome run in night.Runs)
            foreach (ConditionOutcome c in run.Conditions) text.AppendJoin(',', Row(run, c)).Append('\n');
        foreach (FailedRun failed in night.Failed)
            text.AppendJoin(',', [Field(failed.Name), "", "not analysed", .. Enumerable.Repeat("", 15), Field(failed.Fault.ToString())]).Append('\n');
        return text.ToString();
    }

    static IEnumerable<string> Row(RunOutcome run, ConditionOutcome c) =>
    [
        Field(run.Name), Field(c.Name), Words.Of(run.Verdict.Judgement), .. Three(c.Fit.Number), .. Three(c.Fit.Mean), .. Three(c.Fit.Spread),
        Number(c.Fit.Below.CaptureSpeed), Number(c.Fit.Below.Interval?.Low), Number(c.Fit.Below.Interval?.High), Number(c.Fit.Below.Interval?.Confidence),
        run.Tally.Read.ToString(CultureInfo.InvariantCulture), run.Tally.Cuts.Sum(x => x.Numbers.Count).ToString(CultureInfo.InvariantCulture), "",
    ];

    static IEnumerable<string> Three(Quantity q) => [Number(q.Value), Number(q.Statistical), Number(q.Systematic)];

    static string Number(double? value) => value is { } v && double.IsFinite(v) ? v.ToString("G8", CultureInfo.InvariantCulture) : "";

    /// <summary>Quoted by RFC 4180; a text that a spreadsheet would run as a formula gets a leading apostrophe.</summary>
    static string Field(string text)
    {
        string safe = text.Length > 0 && "=+-@\t\r".Contains(text[0], StringComparison.Ordinal) ? "'" + text : text;
        return safe.AsSpan().IndexOfAny(",\"\r\n") < 0 ? safe : $"\"{safe.Replace("\"", "\"\"", StringComparison.Ordinal)}\"";
    }
}
