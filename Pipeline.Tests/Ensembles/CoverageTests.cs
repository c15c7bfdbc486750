using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Configuration;
using Pipeline.Fitting;
using Pipeline.Reduction;
using Pipeline.Tests.Support;
using SampleDay;
using Xunit.Abstractions;

namespace Pipeline.Tests.Ensembles;

/// <summary>Intervals on an ensemble of runs made molecule by molecule and photon by photon, by code that shares nothing with the response.
/// ARRIVALS_ENSEMBLE=400 runs the full one.</summary>
public class CoverageTests(ITestOutputHelper output)
{
    static readonly int Runs = MadeShots.Runs;

    [Fact]
    public void Fit_FreeFlightEnsemble_PullsAreNormalAndCaptureIntervalsCover()
    {
        LabConfiguration lab = ConfigurationReader.Read(Path.Combine(Repository.Root, "config"));
        FitSettings fit = lab.Analysis.Fit;
        var settings = new AnalysisSettings
        {
            Background = "steady", Reduction = new ReductionSettings { ShotsPerBlock = 5 }, Comparison = lab.Analysis.Comparison,
            Fit = new FitSettings { FromSeconds = fit.FromSeconds, VelocityFrom = fit.VelocityFrom, VelocityTo = fit.VelocityTo, VelocityStep = 4, Replicas = 60 },
        };
        // nature is what the lab notes, so that only statistical errors are at work
        var (scene, beam) = (new Scene(), Day.Usual);
        var plan = new RunPlan { Conditions = ["off"], Signal = 60, NoAblation = 20, ProbeBlocked = 10, Dark = 8, Step = 20e-6, Samples = 2050 };
        Truth truth = Truth.Of(scene, beam, false, lab.Setup.CaptureSpeed, 5);
        var pulls = (Number: new double[Runs], Mean: new double[Runs], Spread: new double[Runs]);
        int below = 0;
        for (int k = 0; k < Runs; k++)
        {
            SpectrumOutcome found = RunAnalysis.Fit(MadeShots.Reduce(Simulate.Run(scene, beam, plan, 1000 + k), plan, lab.Setup, settings), "arrival", lab.Setup, settings).Single();
            pulls.Number[k] = (found.Number.Value - truth.Molecules) / found.Number.Statistical;
            pulls.Mean[k] = (found.Mean.Value - truth.MeanSpeed) / found.Mean.Statistical;
            pulls.Spread[k] = (found.Spread.Value - truth.Spread) / found.Spread.Statistical;
            if (found.Below.Interval!.Value.Contains(truth.BelowCapture)) below++;
        }
        Check("number", pulls.Number);
        Check("mean velocity", pulls.Mean);
        Check("spread", pulls.Spread);
        output.WriteLine($"below capture: {below} of {Runs} intervals of 90 % hold the truth");
        Assert.True(below >= 0.9 * Runs - 3 * Math.Sqrt(0.09 * Runs), $"{below} of {Runs}");
    }

    /// <summary>Laser scans at 45 degrees with two lines, some hundred counts a condition, and the same beam in every run.</summary>
    [Theory]
    [InlineData("doppler", 2e-3, 45e-6)]
    [InlineData("map", 2e-3, 45e-6)]
    [InlineData("map", 2e-3, 1.5e-3)]
    public void Fit_ScanEnsemble_PullsAreNormal(string mode, double efficiency, double tail)
    {
        LabConfiguration lab = ConfigurationReader.Read(Path.Combine(Repository.Root, "config"));
        var scene = new Scene { Angle = Math.PI / 4, Efficiency = efficiency, EmissionTail = tail, Lines = [(-9e6, 0.6), (14e6, 0.4)] };
        var setup = lab.Setup with
        {
            Species = lab.Setup.Species with { Lines = [new(-9e6, 0.6), new(14e6, 0.4)] },
            Emission = new ExponentialGaussianEmission { Delay = new(scene.EmissionDelay), Width = new(scene.EmissionWidth), Tail = new(tail) },
            Detector = lab.Setup.Detector with { Efficiency = new(efficiency) }, Probe = lab.Probes["angled"],
        };
        var settings = new AnalysisSettings
        {
            Background = "steady", Reduction = new ReductionSettings { ShotsPerBlock = 5, ByPoint = true }, Comparison = lab.Analysis.Comparison,
            Fit = new FitSettings { FromSeconds = 1.5e-3, VelocityFrom = 6, VelocityTo = 246, VelocityStep = 4, Replicas = 60 },
        };
        var plan = new RunPlan { Conditions = ["off"], Signal = 144, NoAblation = 36, ProbeBlocked = 18, Dark = 12, Step = 20e-6, Samples = 2050, Scan = [.. Enumerable.Range(0, 36).Select(k => -20e6 + 7.5e6 * k)] };
        Truth truth = Truth.Of(scene, Day.Usual, false, lab.Setup.CaptureSpeed, 5);
        int runs = Math.Max(12, Runs / 2);
        var (number, mean, errors) = (new double[runs], new double[runs], new double[runs]);
        for (int k = 0; k < runs; k++)
        {
            SpectrumOutcome found = RunAnalysis.Fit(MadeShots.Reduce(Simulate.Run(scene, Day.Usual, plan, 3000 + k), plan, setup, settings), mode, setup, settings).Single();
            number[k] = (found.Number.Value - truth.Molecules) / found.Number.Statistical;
            mean[k] = (found.Mean.Value - truth.MeanSpeed) / found.Mean.Statistical;
            errors[k] = found.Mean.Statistical;
        }
        Check($"{mode} number", number);
        Check($"{mode} mean velocity", mean);
        output.WriteLine($"error of the mean velocity: {string.Join(", ", errors.Order().Select(e => $"{e:F1}"))} m/s");
    }

    /// <summary>Mean within four standard errors of zero, width within four of one.</summary>
    void Check(string name, double[] pulls)
    {
        double mean = pulls.Average(), width = Math.Sqrt(pulls.Sum(p => (p - mean) * (p - mean)) / (pulls.Length - 1));
        output.WriteLine($"{name}: mean pull {mean:F2}, width {width:F2}, {pulls.Count(p => Math.Abs(p) < 1)} of {pulls.Length} within one");
        Assert.InRange(mean, -4 / Math.Sqrt(pulls.Length), 4 / Math.Sqrt(pulls.Length));
        Assert.InRange(width, 1 - 4 / Math.Sqrt(2.0 * pulls.Length), 1 + 4 / Math.Sqrt(2.0 * pulls.Length));
    }
}
