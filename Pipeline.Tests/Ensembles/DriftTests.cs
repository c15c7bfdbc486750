using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Configuration;
using Pipeline.Fitting;
using Pipeline.Reduction;
using Pipeline.Tests.Support;
using SampleDay;
using Xunit.Abstractions;

namespace Pipeline.Tests.Ensembles;

/// <summary>Scans up and down with a laser that drifts, made molecule by molecule.</summary>
public class DriftTests(ITestOutputHelper output)
{
    /// <summary>Hz. The comparison of halves is of first order: at 24 MHz, beside lines of 8 MHz, it read 1.5 MHz too little in the mean of 54 runs; at 12 MHz
    /// 0.7 ± 0.5 MHz in 14 runs.</summary>
    const double Drift = 12e6;
    static readonly LabConfiguration Lab = ConfigurationReader.Read(Path.Combine(Repository.Root, "config"));
    static readonly Scene Scene = new() { Angle = Math.PI / 4, Efficiency = 1e-2 };
    static readonly Setup Setup = Lab.Setup with { Detector = Lab.Setup.Detector with { Efficiency = new(1e-2) }, Probe = Lab.Probes["angled"] };

    static readonly AnalysisSettings Settings = new()
    {
        Background = "steady", Reduction = new ReductionSettings { ShotsPerBlock = 5, ByPoint = true }, Comparison = Lab.Analysis.Comparison,
        Fit = new FitSettings { FromSeconds = 1.5e-3, VelocityFrom = 6, VelocityTo = 246, VelocityStep = 8, Replicas = 50 },
    };

    /// <summary>Passes apart: mean velocity as without drift, and the drift found with its sign; warned of where it is large.</summary>
    [Theory]
    [InlineData(0, 51)]
    [InlineData(Drift, 52)]
    [InlineData(-Drift, 53)]
    public void Fit_PassesApart_FindTheDrift(double drift, int seed)
    {
        SpectrumOutcome found = Fit(drift, apart: true, seed);
        string remark = found.Remarks.Single(r => r.Contains("up and down differ", StringComparison.Ordinal));
        output.WriteLine(remark);
        string[] words = remark[(remark.IndexOf("laser by ", StringComparison.Ordinal) + 9)..].Split(' ');
        double told = 1e6 * double.Parse(words[0], System.Globalization.CultureInfo.InvariantCulture), error = 1e6 * double.Parse(words[2], System.Globalization.CultureInfo.InvariantCulture);
        Assert.InRange(told - drift, -3.5 * error, 3.5 * error);
        Assert.InRange(error, 0.2e6, 7e6);
        Assert.Equal(drift != 0, remark.Contains("three standard errors", StringComparison.Ordinal));
        MeanIsTrue(found);
    }

    /// <summary>Passes in the same points: nothing to compare, and the mean velocity as true.</summary>
    [Fact]
    public void Fit_PassesTogether_AverageTheDriftOut()
    {
        SpectrumOutcome found = Fit(8e6, apart: false, 54);
        Assert.Contains(found.Remarks, r => r.Contains("averaged out to first order", StringComparison.Ordinal));
        Assert.DoesNotContain(found.Remarks, r => r.Contains("up and down differ", StringComparison.Ordinal));
        MeanIsTrue(found);
    }

    void MeanIsTrue(SpectrumOutcome found)
    {
        double truth = Truth.Of(Scene, Day.Usual, false, Lab.Setup.CaptureSpeed, 5).MeanSpeed;
        output.WriteLine($"mean {found.Mean.Value:F1} ± {found.Mean.Total:F1} for {truth:F1} m/s");
        Assert.InRange(found.Mean.Value - truth, -3.5 * found.Mean.Total, 3.5 * found.Mean.Total);
    }

    static SpectrumOutcome Fit(double drift, bool apart, int seed)
    {
        var plan = new RunPlan
        {
            Conditions = ["off"], Signal = 192, NoAblation = 36, ProbeBlocked = 18, Dark = 12, Step = 20e-6, Samples = 2050, Scan = [.. Enumerable.Range(0, 32).Select(k => -20e6 + 8e6 * k)],
            UpDown = true, PassesApart = apart, AxisDrift = drift,
        };
        return RunAnalysis.Fit(MadeShots.Reduce(Simulate.Run(Scene, Day.Usual, plan, seed), plan, Setup, Settings), "doppler", Setup, Settings).Single();
    }
}
