using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Configuration;
using Pipeline.Fitting;
using Pipeline.Quantities;
using Pipeline.Reduction;
using Pipeline.Statistics;
using Pipeline.Tests.Support;
using SampleDay;
using Xunit.Abstractions;

namespace Pipeline.Tests.Ensembles;

/// <summary>Intervals of 90 % for the number below 24 m/s where the slow molecules leave a few photons in the whole run.</summary>
public class SlowMoleculeTests(ITestOutputHelper output)
{
    const double Capture = 24;
    static readonly int Runs = MadeShots.Runs;

    /// <param name="photons">Mean number of detected photons of molecules below 24 m/s in a run.</param>
    /// <param name="tail">Emission pulse, s.</param>
    [Theory]
    [InlineData(0, 45e-6)]
    [InlineData(1, 45e-6)]
    [InlineData(5, 45e-6)]
    [InlineData(40, 45e-6)]
    [InlineData(40, 3e-3)]
    public void Fit_FewSlowPhotons_IntervalCovers(double photons, double tail)
    {
        LabConfiguration lab = ConfigurationReader.Read(Path.Combine(Repository.Root, "config"));
        var scene = new Scene { EmissionTail = tail, ScatterRate = 25, DarkRate = 5, FlashCounts = [5], FlashTimes = [70e-6] };
        var plan = new RunPlan { Conditions = ["off"], Signal = 60, NoAblation = 30, ProbeBlocked = 10, Dark = 10, Step = 40e-6, Samples = 2100 };
        var slow = new Beam(1, 16, 3);
        double each = PhotonsOf(scene, slow);
        Beam beam = Day.Usual with { Emitted = 150, Slower = slow with { Emitted = photons / (each * plan.Signal) } };
        var setup = lab.Setup with
        {
            CaptureSpeed = Capture, Emission = new ExponentialGaussianEmission { Delay = new(scene.EmissionDelay), Width = new(scene.EmissionWidth), Tail = new(tail) },
        };
        var settings = new AnalysisSettings
        {
            Background = "steady", Reduction = new ReductionSettings { ShotsPerBlock = 2 }, Comparison = lab.Analysis.Comparison,
            Fit = new FitSettings { FromSeconds = 1.5e-3, VelocityFrom = 8, VelocityTo = 248, VelocityStep = 4, Replicas = 60 },
        };
        Truth truth = Truth.Of(scene, beam, false, Capture, 5);
        (int hold, double width, double known, int zero) = (0, 0, 0, 0);
        (int strict, double strictWidth, int strictZero) = (0, 0, 0);
        var values = new List<double>();
        for (int k = 0; k < Runs; k++)
        {
            IReadOnlyList<Shot> shots = Simulate.Run(scene, beam, plan, 7000 + k);
            BelowCapture found = RunAnalysis.Fit(MadeShots.Reduce(shots, plan, setup, settings), "arrival", setup, settings).Single().Below;
            Interval interval = found.Interval ?? throw new InvalidOperationException(found.NotDeterminedBecause);
            values.Add(found.Value);
            if (interval.Contains(truth.BelowCapture)) hold++;
            if (interval.Low == 0) zero++;
            Interval all = found.Strict!.Value;
            if (all.Contains(truth.BelowCapture)) strict++;
            if (all.Low == 0) strictZero++;
            strictWidth += all.High - all.Low;
            width += interval.High - interval.Low;
            known += Known(shots, plan, scene, truth, photons);
        }
        output.WriteLine($"{photons} photons, pulse {tail * 1e3} ms: {hold} of {Runs} intervals of 90 % hold {truth.BelowCapture:F3} molecules a shot; mean {values.Average():F3}, {zero} begin at zero; {width / known:F2} times as wide as with the background known");
        output.WriteLine($"   over all spectra, photons: {strict} of {Runs} hold it; {strictZero} begin at zero; {strictWidth / known:F2} times as wide");
        Assert.True(strict >= 0.88 * Runs - 3 * Math.Sqrt(0.12 * 0.88 * Runs), $"over all spectra {strict} of {Runs}");
        Assert.True(hold >= 0.88 * Runs - 3 * Math.Sqrt(0.12 * 0.88 * Runs), $"{hold} of {Runs}");
        if (photons >= 40) Assert.True(width < 2 * known, $"{width / known:F2} times as wide");
    }

    /// <summary>Width of the central Poisson interval for counts after the arrival of 24 m/s, in molecules a shot, with nothing to be learnt of the background.</summary>
    static double Known(IReadOnlyList<Shot> shots, RunPlan plan, Scene scene, Truth truth, double photons)
    {
        double from = scene.EmissionDelay + scene.SourceToProbe / Capture;
        int first = (int)((from - plan.Start) / plan.Step);
        int counted = shots.Where(s => s.Kind == Kind.Signal).Sum(s => s.Counts.Skip(first).Sum(c => c));
        Interval interval = CountInterval.Central(counted, 0.9);
        double per = photons > 0 ? truth.BelowCapture / photons : double.NaN;
        return (interval.High - interval.Low) * per;
    }

    /// <summary>Mean number of detected photons for each molecule emitted, of those below 24 m/s.</summary>
    static double PhotonsOf(Scene scene, Beam beam)
    {
        var draw = new Draw(3);
        var times = new List<double>();
        const int Molecules = 100_000;
        for (int k = 0; k < Molecules; k++)
            if (Flight.ToProbe(scene, Flight.Emit(scene, beam, draw), false) is { } at && at.Speed < Capture) Fluorescence.Detect(scene, at, 0, 1, draw, times);
        return (double)times.Count / Molecules;
    }
}
