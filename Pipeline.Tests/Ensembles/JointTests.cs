using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Configuration;
using Pipeline.Fitting;
using Pipeline.Reduction;
using Pipeline.Tests.Support;
using SampleDay;
using Xunit.Abstractions;

namespace Pipeline.Tests.Ensembles;

/// <summary>Runs of one beam whose emission pulse nobody told: alone they leave the velocity open, together they do not.</summary>
public class JointTests(ITestOutputHelper output)
{
    const double Tail = 1.2e-3;
    static readonly LabConfiguration Lab = ConfigurationReader.Read(Path.Combine(Repository.Root, "config"));
    // so narrow that the same molecules pass both probes: what is cut at the second distance is not the same beam
    static readonly Scene Far = new() { TransverseSpeed = 0.05, SourceSize = 0.3e-3, EmissionTail = Tail, EmissionWidth = 1e-6, EmissionDelay = 0.3e-3, Efficiency = 4e-3 };
    static readonly Scene Angled = Far with { Angle = Math.PI / 4 };
    static readonly Scene Near = Far with { SourceToProbe = 0.25, SourceToEntrance = 0.05, DeceleratorLength = 0.1 };
    static readonly RunPlan Still = new() { Conditions = ["off"], Signal = 60, NoAblation = 30, ProbeBlocked = 15, Dark = 10, Step = 20e-6, Samples = 2050 };
    static readonly RunPlan Scan = Still with { Signal = 120, Scan = [.. Enumerable.Range(0, 30).Select(k => 20e6 + 7e6 * k)] };
    static readonly AnalysisSettings Settings = new()
    {
        Background = "steady", Reduction = new ReductionSettings { ShotsPerBlock = 2 }, Comparison = Lab.Analysis.Comparison,
        Fit = new FitSettings { FromSeconds = 0.8e-3, VelocityFrom = 30, VelocityTo = 250, VelocityStep = 4, Replicas = 60 },
    };

    static JointMember Member(string name, Scene scene, RunPlan plan, string mode, int seed)
    {
        Setup setup = Lab.Setup with
        {
            Emission = new UnknownEmission { Longest = new(4e-3) }, Detector = Lab.Setup.Detector with { Efficiency = new(scene.Efficiency) },
            Probe = mode == "doppler" ? Lab.Probes["angled"] : Lab.Setup.Probe, Beamline = Lab.Setup.Beamline with { SourceToProbe = new(scene.SourceToProbe) },
        };
        AnalysisSettings settings = mode == "doppler" ? Settings with { Reduction = Settings.Reduction with { ByPoint = true } } : Settings;
        return new JointMember(name, MadeShots.Reduce(Simulate.Run(scene, Day.Usual with { Emitted = 820 }, plan, seed), plan, setup, settings), "off", setup, mode);
    }

    static IReadOnlyList<SpectrumOutcome> Fit(params JointMember[] members) => JointFitter.Fit(members, BackgroundModels.Named("steady"), Settings.Fit, 0.1);

    [Fact]
    public void Fit_ArrivalAlone_LeavesThePulseOpen()
    {
        SpectrumOutcome found = Fit(Member("far", Far, Still, "arrival", 1))[0];
        Assert.Empty(found.Spectra);
        Assert.Contains("emission pulse", found.NotDeterminedBecause, StringComparison.Ordinal);
        output.WriteLine(found.NotDeterminedBecause);
    }

    [Theory]
    [InlineData("doppler")]
    [InlineData("near")]
    public void Fit_WithADopplerScanOrASecondDistance_FindsBeamAndPulse(string second)
    {
        Truth truth = Truth.Of(Far, Day.Usual with { Emitted = 820 }, false, Lab.Setup.CaptureSpeed, 5);
        int runs = Math.Max(4, MadeShots.Runs / 6);
        var (mean, tail, number, errors) = (new double[runs], new double[runs], new double[runs], new double[runs]);
        for (int k = 0; k < runs; k++)
        {
            JointMember other = second == "doppler" ? Member("angled", Angled, Scan, "doppler", 500 + k) : Member("near", Near, Still, "arrival", 500 + k);
            IReadOnlyList<SpectrumOutcome> found = Fit(Member("far", Far, Still, "arrival", 100 + k), other);
            SpectrumOutcome first = found[0];
            Assert.True(first.Spectra.Count > 0, first.NotDeterminedBecause);
            NamedQuantity fall = first.Others.Single(o => o.Name == "emission fall, fitted");
            double pulse = Math.Sqrt(first.Mean.Budget.Where(b => b.Cause.StartsWith("fitted pulse", StringComparison.Ordinal)).Sum(b => b.Shift * b.Shift));
            errors[k] = double.Hypot(first.Mean.Statistical, pulse);
            mean[k] = (first.Mean.Value - truth.MeanSpeed) / errors[k];
            tail[k] = (fall.Quantity.Value - Tail) / fall.Quantity.Statistical;
            number[k] = (first.Number.Value - truth.Molecules) / double.Hypot(first.Number.Statistical, Math.Sqrt(first.Number.Budget.Where(b => b.Cause.StartsWith("fitted pulse", StringComparison.Ordinal)).Sum(b => b.Shift * b.Shift)));
            output.WriteLine($"{first.Mean.Value:F2} ± {first.Mean.Statistical:F2} ± {pulse:F2} ({truth.MeanSpeed:F2}); {first.Number.Value:F0} ({truth.Molecules:F0}); fall {1e3 * fall.Quantity.Value:F3} ± {1e3 * fall.Quantity.Statistical:F3}");
            Assert.Equal(first.Mean.Value, found[1].Mean.Value);
        }
        foreach ((string name, double[] pulls) in new[] { ("mean", mean), ("fall", tail), ("number", number) })
        {
            double average = pulls.Average(), width = Math.Sqrt(pulls.Sum(p => p * p) / runs);
            output.WriteLine($"{second} {name}: mean pull {average:F2}, root mean square {width:F2}");
            Assert.InRange(average, -4 / Math.Sqrt(runs), 4 / Math.Sqrt(runs));
            Assert.InRange(width, 0, 1 + 4 / Math.Sqrt(2.0 * runs));
        }
        Assert.All(errors, e => Assert.InRange(e, 0.1, 5));
    }
}
