using System.Diagnostics;
using System.Security.Cryptography;
using System.Text;
using System.Text.Json;
using System.Text.RegularExpressions;
using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Comparison;
using Pipeline.Fitting;
using Pipeline.Predictions;
using Pipeline.Reduction;
using Pipeline.Reports;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Reports;

public partial class PageTests
{
    const string Hostile = "\"><img src=x onerror=alert(1)><script>alert(2)</script>";

    static readonly Lazy<RunOutcome> Made = new(() => Make("0930-test", "off"));

    [Fact]
    public void Render_Run_HoldsEverySection()
    {
        string page = RunPage.Render(Made.Value);
        foreach (string part in (string[])["Run 0930-test", "molecules per shot", "mean velocity", "velocity spread", "below 24.0 m/s", "Signal", "Velocity spectrum",
            "Systematic budget", "Questions asked", "Made from", "no interlock and no safety device", "2 cut for probe unlocked", "flight length"])
            Assert.Contains(part, page, StringComparison.Ordinal);
        Assert.Equal(2, SvgStart().Count(page) - KeySvg().Count(page));
        Assert.InRange(Encoding.UTF8.GetByteCount(page), 10_000, 1_000_000);
    }

    /// <summary>The choice among families is seen on the page and by programs, and the intervals with it; a single family has no choice to show.</summary>
    [Fact]
    public void Render_BestShape_ShowsEveryFamily()
    {
        RunOutcome run = Make("0930-test", "off", "best");
        VelocitySpectrum shape = run.Conditions[0].Fit.Spectra.Single(s => s.Estimator == "shape");
        string page = RunPage.Render(run), plain = RunPage.Render(Made.Value);
        JsonElement json = JsonDocument.Parse(Pipeline.Results.ResultJson.Render(run)).RootElement.GetProperty("conditions").GetProperty("off").GetProperty("estimators").GetProperty("shape");
        Assert.Equal(4, shape.Choices.Count);
        Assert.Equal(shape.Choices.Select(c => c.Family), json.GetProperty("families").EnumerateArray().Select(f => f.GetProperty("family").GetString()));
        Assert.Equal(shape.Choices.Single(c => c.Chosen).Family, json.GetProperty("families").EnumerateArray().Single(f => f.GetProperty("chosen").GetBoolean()).GetProperty("family").GetString());
        Assert.Equal(shape.Parameters.Select(p => p.Low), json.GetProperty("parameters").EnumerateArray().Select(p => p.GetProperty("low").GetDouble()));
        foreach (ShapeChoice choice in shape.Choices) Assert.Contains($"<td>{choice.Family}</td><td class=\"n\">", page, StringComparison.Ordinal);
        Assert.Contains("<td>taken", page, StringComparison.Ordinal);
        Assert.DoesNotContain("<td>taken", plain, StringComparison.Ordinal);
        Assert.Contains("<td>alpha (m/s)</td>", plain, StringComparison.Ordinal);
    }

    [Fact]
    public void Render_HostileNames_StayText()
    {
        RunOutcome run = Make(Hostile, Hostile);
        var night = new NightOutcome(Hostile, [run], [new FailedRun(Hostile, new Fault(Hostile, Hostile, Hostile, Hostile))], [Hostile]);
        foreach (string page in (string[])[RunPage.Render(run), NightPage.Render(night)])
        {
            Assert.DoesNotContain("<script", page, StringComparison.OrdinalIgnoreCase);
            Assert.DoesNotContain("<img", page, StringComparison.OrdinalIgnoreCase);
            Assert.Contains("&lt;script&gt;", page, StringComparison.Ordinal);
        }
    }

    [Fact]
    public void Render_Pages_FetchNothingAndTheirPolicyFits()
    {
        var night = new NightOutcome("2031-01-02", [Made.Value], [], []);
        foreach (string page in (string[])[RunPage.Render(Made.Value), NightPage.Render(night)])
        {
            Assert.DoesNotContain("http:", page, StringComparison.Ordinal);
            Assert.DoesNotContain("https:", page, StringComparison.Ordinal);
            Assert.DoesNotContain(" style=", page, StringComparison.Ordinal);
            string style = page.Split("<style>")[1].Split("</style>")[0];
            Assert.Contains($"style-src 'sha256-{Convert.ToBase64String(SHA256.HashData(Encoding.UTF8.GetBytes(style)))}'", page, StringComparison.Ordinal);
            Assert.Contains("default-src 'none'", page, StringComparison.Ordinal);
        }
    }

    [Fact]
    public void Render_OtherCulture_GivesTheSameBytes()
    {
        string plain = RunPage.Render(Made.Value), table = NightTable.Render(new NightOutcome("d", [Made.Value], [], []));
        Culture.Run("de-DE", () =>
        {
            Assert.Equal(plain, RunPage.Render(Made.Value));
            Assert.Equal(table, NightTable.Render(new NightOutcome("d", [Made.Value], [], [])));
        });
    }

    [Fact]
    public void Render_Night_PutsWhatNeedsAttentionFirst()
    {
        RunOutcome wrong = Made.Value with { Name = "b-wrong", Verdict = new Verdict(Judgement.Disagrees, ["because"], []) };
        RunOutcome good = Made.Value with { Name = "a-good", Verdict = new Verdict(Judgement.Agrees, ["fine"], []) };
        string page = NightPage.Render(new NightOutcome("d", [good, wrong], [new FailedRun("c-broken", new Fault("c.h5", "x", "y", "z"))], ["notes.txt"]));
        string attention = page.Split("All runs")[0];
        Assert.Contains("b-wrong", attention, StringComparison.Ordinal);
        Assert.Contains("c-broken", attention, StringComparison.Ordinal);
        Assert.DoesNotContain("a-good", attention, StringComparison.Ordinal);
        Assert.Contains("notes.txt", page, StringComparison.Ordinal);
        Assert.Contains("href=\"b-wrong/report.html\"", page, StringComparison.Ordinal);
    }

    [Fact]
    public void Render_Table_QuotesAndDefusesText()
    {
        RunOutcome run = Made.Value with { Name = "=cmd,\"x\"" };
        string[] lines = NightTable.Render(new NightOutcome("d", [run], [new FailedRun("@bad", new Fault("f", "a,b", "c", "d"))], [])).Split('\n');
        Assert.StartsWith("\"'=cmd,\"\"x\"\"\",off,", lines[1], StringComparison.Ordinal);
        Assert.StartsWith("'@bad,,not analysed,", lines[2], StringComparison.Ordinal);
        Assert.EndsWith("\"f: found a,b; expected c; d\"", lines[2], StringComparison.Ordinal);
        Assert.Equal(lines[0].Split(',').Length, lines[2].Replace("a,b", "ab", StringComparison.Ordinal).Split(',').Length);
    }

    [Theory]
    [InlineData(2964.3, 130.2, 95.1, "2960 ± 130 (statistical) ± 100 (systematic)")]
    [InlineData(147.412, 0.164, 0.222, "147.41 ± 0.16 (statistical) ± 0.22 (systematic)")]
    [InlineData(-0.5, 1.2, 0, "-0.5 ± 1.2 (statistical) ± 0.0 (systematic)")]
    [InlineData(0.001234, 0.0000567, 0, "0.001234 ± 0.000057 (statistical) ± 0.000000 (systematic)")]
    public void WithErrors_SeveralSizes_ShowsTwoDigitsOfTheError(double value, double statistical, double systematic, string expected) =>
        Assert.Equal(expected, Numbers.WithErrors(Quantity.Of(value, statistical, [new BudgetLine("x", systematic)])));

    [SkippableFact]
    public void Render_InChromium_DrawsWithoutAComplaint()
    {
        const string Browser = "/usr/bin/chromium";
        Skip.IfNot(File.Exists(Browser), "no Chromium on this machine");
        string folder = Directory.CreateTempSubdirectory("arrivals-page").FullName;
        File.WriteAllText(Path.Combine(folder, "report.html"), RunPage.Render(Make(Hostile, "off")));
        var start = new ProcessStartInfo(Browser,
            ["--headless", "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking", "--disable-component-update", "--disable-sync",
            $"--user-data-dir={folder}/profile", "--enable-logging=stderr", "--v=0", "--dump-dom", $"file://{folder}/report.html"]) { RedirectStandardOutput = true, RedirectStandardError = true, UseShellExecute = false };
        using Process browser = Process.Start(start)!;
        Task<string> said = browser.StandardError.ReadToEndAsync();
        string dom = browser.StandardOutput.ReadToEnd();
        Assert.True(browser.WaitForExit(60_000));
        Assert.Contains("<path class=\"fit\"", dom, StringComparison.Ordinal);
        Assert.DoesNotContain("<img", dom, StringComparison.Ordinal);
        Assert.DoesNotContain("CONSOLE", said.Result, StringComparison.Ordinal);
        Directory.Delete(folder, recursive: true);
    }

    static RunOutcome Make(string name, string condition, string shape = "supersonic")
    {
        Setup setup = TestSetups.OneMetre(new GaussianEmission { Delay = new(1e-4), Width = new(5e-5) }, 20, null);
        setup = setup with
        {
            Beamline = new Beamline { SourceToProbe = new(1, 0.002) },
            Conditions = new Dictionary<string, FlightKind>(StringComparer.Ordinal) { [condition] = FlightKind.Free },
        };
        var grid = new VelocityGrid(20, 300, 5);
        var made = new MadeUpRun();
        ResponseMatrix response = new ArrivalResponse().Build(setup, condition, made.Axis, grid);
        double[] beam = [.. Enumerable.Range(0, grid.Cells).Select(c => 40 * Math.Exp(-Math.Pow((grid.Centre(c) - 150) / 25, 2)))];
        BinnedRun run = new MadeUpRun { Molecules = response.Fold(beam) }.Make(60, 12, new Random(2));
        run = run with { Groups = [.. run.Groups.Select(g => g with { Condition = condition })], Cuts = [new ShotCut("probe unlocked", [4, 17])], Remarks = [name] };
        var settings = new AnalysisSettings
        {
            Reduction = new ReductionSettings(), Background = "steady", Comparison = new ComparisonSettings(),
            Fit = new FitSettings { FromSeconds = 1.5e-3, VelocityFrom = 20, VelocityTo = 300, VelocityStep = 5, Replicas = 50, Shape = shape },
        };
        double[] zeros = new double[500], speeds = [.. Enumerable.Range(0, 500).Select(k => 110 + 80.0 * k / 500)];
        var list = new MoleculeList([.. zeros.Select(_ => 1e-4)], zeros, speeds, zeros, zeros, zeros, zeros, [.. zeros.Select(_ => 0.7)], MoleculeWeighting.Crossings);
        var (conditions, verdict) = RunAnalysis.Compare(RunAnalysis.Fit(run, "arrival", setup, settings),
            new Dictionary<string, ConditionPrediction>(StringComparer.Ordinal) { [condition] = new(list, false) }, setup, settings);
        return new RunOutcome
        {
            Name = name, Mode = "arrival", Tally = ShotTally.Of(run), Conditions = conditions, Verdict = verdict, Remarks = run.Remarks,
            Provenance = new Provenance
            {
                Inputs = [new InputFile("a.h5", new string('0', 64))], Predictions = [], Configuration = new string('1', 64), Program = "arrivals 0.0.0",
                NumericalVersion = 1, Seed = 1, Reader = "none",
            },
        };
    }

    [GeneratedRegex("<svg ", RegexOptions.None, matchTimeoutMilliseconds: 10_000)]
    private static partial Regex SvgStart();

    [GeneratedRegex("<svg viewBox=\"0 0 34 12\"", RegexOptions.None, matchTimeoutMilliseconds: 10_000)]
    private static partial Regex KeySvg();
}
