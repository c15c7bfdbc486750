using System.Globalization;
using Pipeline.Analysis;
using Pipeline.Comparison;
using Pipeline.Fitting;

namespace Pipeline.Reports;

/// <summary>night.html: first what needs a decision, then every run.</summary>
public static class NightPage
{
    public static string Render(NightOutcome night)
    {
        RunOutcome[] attention = [.. night.Runs.Where(r => r.Verdict.Judgement != Judgement.Agrees)
            .OrderBy(r => r.Verdict.Judgement == Judgement.Disagrees ? 0 : 1)];
        return Page.Render($"Night of {night.Day}", Html.Of($"""
            <h1>Night of {night.Day}</h1>
            <p>{Count(night, Judgement.Agrees)} agree, {Count(night, Judgement.Disagrees)} disagree, {Count(night, Judgement.Undecided)} undecided, {night.Failed.Count} not analysed.</p>
            {Attention(attention, night.Failed)}
            <h2>All runs</h2>
            <div class="scroll"><table><tr><th>run</th><th>condition</th><th>verdict</th><th class="n">molecules per shot</th><th class="n">mean (m/s)</th><th class="n">spread (m/s)</th><th class="n">below capture</th><th class="n">shots cut</th></tr>
            {night.Runs.SelectMany(Rows)}{night.Failed.Select(f => Html.Of($"<tr><td>{f.Name}</td><td>–</td><td colspan=\"6\">not analysed</td></tr>"))}</table></div>
            {Joints(night.Joints)}
            {NotRuns(night.NotRuns)}
            """));
    }

    static int Count(NightOutcome night, Judgement judgement) => night.Runs.Count(r => r.Verdict.Judgement == judgement);

    static Markup Attention(IReadOnlyList<RunOutcome> runs, IReadOnlyList<FailedRun> failed)
    {
        if (runs.Count == 0 && failed.Count == 0) return Html.Of($"<p>Nothing needs attention.</p>");
        IEnumerable<Markup> boxes = runs.Select(r => Html.Of($"""
            <div class="verdict {Words.Of(r.Verdict.Judgement)}"><p><strong>{Link(r.Name)} {(r.Verdict.Judgement == Judgement.Disagrees ? "disagrees" : "is undecided")}</strong></p>{r.Verdict.Reasons.Select(x => Html.Of($"<p>{x}.</p>"))}</div><p></p>
            """));
        IEnumerable<Markup> faults = failed.Select(f => Html.Of($"""
            <div class="verdict undecided"><p><strong>{f.Name} was not analysed</strong></p><p>{f.Fault.Where}: found {f.Fault.Found}; expected {f.Fault.Expected}. To do: {f.Fault.Remedy}.</p></div><p></p>
            """));
        return Html.Of($"<h2>Needs attention</h2>{boxes}{faults}");
    }

    static IEnumerable<Markup> Rows(RunOutcome run) => run.Conditions.Select((c, k) => Html.Of($"""
        <tr><td>{(k == 0 ? Link(run.Name) : Markup.None)}</td><td>{c.Name}</td><td>{(k == 0 ? Words.Of(run.Verdict.Judgement) : "")}</td><td class="n">{Numbers.WithTotal(c.Fit.Number)}</td>
        <td class="n">{Numbers.WithTotal(c.Fit.Mean)}</td><td class="n">{Numbers.WithTotal(c.Fit.Spread)}</td><td class="n">{Below(c.Fit.Below)}</td><td class="n">{(k == 0 ? Cut(run) : "")}</td></tr>
        """));

    static Markup Joints(IReadOnlyList<RunOutcome> joints) => joints.Count == 0 ? Markup.None : Html.Of($"""
        <h2>Runs fitted together</h2>
        <div class="scroll"><table><tr><th>name</th><th>runs</th><th class="n">molecules per shot</th><th class="n">mean (m/s)</th><th class="n">spread (m/s)</th></tr>
        {joints.Select(j => Html.Of($"""<tr><td>{Link(j.Name)}</td><td>{string.Join("; ", j.Conditions.Select(c => c.Name))}</td><td class="n">{Numbers.WithTotal(j.Conditions[0].Fit.Number)}</td><td class="n">{Numbers.WithTotal(j.Conditions[0].Fit.Mean)}</td><td class="n">{Numbers.WithTotal(j.Conditions[0].Fit.Spread)}</td></tr>"""))}</table></div>
        """);

    static string Below(BelowCapture b) => b.Interval is { } i ? $"{Numbers.Digits(i.Low)} to {Numbers.Digits(i.High)}" : "not determined";

    static string Cut(RunOutcome run) =>
        string.Create(CultureInfo.InvariantCulture, $"{run.Tally.Cuts.Sum(c => c.Numbers.Count)} of {run.Tally.Read}");

    static Markup Link(string run) => Html.Of($"<a href=\"{Uri.EscapeDataString(run)}/report.html\">{run}</a>");

    static Markup NotRuns(IReadOnlyList<string> files) => files.Count == 0 ? Markup.None
        : Html.Of($"<h2>Not looked at</h2><p>No rule of night.toml calls these runs: {string.Join(", ", files)}.</p>");
}
