using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Configuration;
using Pipeline.Fitting;
using Pipeline.Quantities;
using Pipeline.Reduction;
using Pipeline.Tests.Support;
using SampleDay;
using Xunit.Abstractions;

namespace Pipeline.Tests.Ensembles;

/// <summary>Laser scans with the decelerator on and off in turn. Nature collects a tenth more light than the lab thinks: numbers are all a tenth too
/// high, their ratio is not.</summary>
public class DopplerEnsembleTests(ITestOutputHelper output)
{
    const double Stated = 8e-3, Off = 1.1;

    [Fact]
    public void Fit_ScanOnAndOff_PullsAreNormalAndCommonCausesCancelInTheRatio()
    {
        LabConfiguration lab = ConfigurationReader.Read(Path.Combine(Repository.Root, "config"));
        var scene = new Scene { Angle = Math.PI / 4, Efficiency = Off * Stated, ScatterRate = 300, DarkRate = 30, Lines = [(-9e6, 0.6), (14e6, 0.4)] };
        Beam beam = Day.Usual with { Emitted = 800 };
        var plan = new RunPlan
        {
            Conditions = ["on", "off"], Signal = 288, NoAblation = 36, ProbeBlocked = 18, Dark = 12, Step = 20e-6, Samples = 2050,
            Scan = [.. Enumerable.Range(0, 36).Select(k => -20e6 + 7.5e6 * k)],
        };
        Setup setup = MadeShots.Exact(lab.Setup with { Probe = lab.Probes["angled"] });
        setup = setup with
        {
            Species = setup.Species with { Lines = [new(-9e6, 0.6), new(14e6, 0.4)] }, Detector = setup.Detector with { Efficiency = new Measured(Stated, (Off - 1) * Stated) },
            Conditions = new Dictionary<string, FlightKind>(StringComparer.Ordinal) { ["off"] = FlightKind.Free, ["on"] = FlightKind.NotUnique },
        };
        var settings = new AnalysisSettings
        {
            Background = "steady", Reduction = new ReductionSettings { ShotsPerBlock = 5, ByPoint = true }, Comparison = lab.Analysis.Comparison,
            Fit = new FitSettings { FromSeconds = 1.5e-3, VelocityFrom = 6, VelocityTo = 246, VelocityStep = 4, Replicas = 60 },
        };
        Truth on = Truth.Of(scene, beam, true, setup.CaptureSpeed, 5), off = Truth.Of(scene, beam, false, setup.CaptureSpeed, 5);
        var table = new PullTable(output, "doppler");
        for (int k = 0; k < MadeShots.Runs / 3; k++)
        {
            IReadOnlyList<SpectrumOutcome> found = MadeShots.Fit(scene, beam, plan, 14_000 + k, "doppler", setup, settings);
            foreach ((SpectrumOutcome fit, Truth truth) in found.Select(f => (f, f.Signal.Condition == "on" ? on : off)))
            {
                string name = fit.Signal.Condition;
                table.Add($"{name} number", fit.Number, Off * truth.Molecules, fit.Number.Statistical);
                table.Add($"{name} mean velocity", fit.Mean, truth.MeanSpeed);
                Assert.NotNull(fit.Spread.NotDeterminedBecause);
                Assert.InRange(fit.Number.Systematic / fit.Number.Value, 0.095, 0.108);
            }
            Quantity ratio = found.Single(f => f.Signal.Condition == "on").Others.Single(o => o.Name == "number over off").Quantity;
            Assert.InRange(ratio.Systematic / ratio.Value, 0, 0.005);
            table.Add("ratio", ratio, on.Molecules / off.Molecules);
        }
        table.Check();
    }
}
