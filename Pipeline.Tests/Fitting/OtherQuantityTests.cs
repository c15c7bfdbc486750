using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Comparison;
using Pipeline.Fitting;
using Pipeline.Reduction;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Fitting;

public class OtherQuantityTests
{
    static readonly VelocityGrid Grid = new(20, 260, 3);

    static AnalysisSettings Settings => new()
    {
        Background = "steady", Reduction = new ReductionSettings(), Comparison = new ComparisonSettings(),
        Fit = new FitSettings { FromSeconds = 1e-3, VelocityFrom = 20, VelocityTo = 260, VelocityStep = 3, Replicas = 50 },
    };

    /// <summary>Flux v^3 exp(-((v-140)/30)^2): mean 149.2286055 m/s (methods of kinetic theory, closed form).</summary>
    static double[] Beam(double molecules)
    {
        double[] shape = [.. Enumerable.Range(0, Grid.Cells).Select(c => Math.Pow(Grid.Centre(c), 3) * Math.Exp(-Math.Pow((Grid.Centre(c) - 140) / 30, 2)))];
        return [.. shape.Select(s => molecules * s / shape.Sum())];
    }

    static BinnedRun Run(Setup setup)
    {
        var axis = new MadeUpRun().Axis;
        double[] signal = new ArrivalResponse().Build(setup, "off", axis, Grid).Fold(Beam(200));
        return new MadeUpRun { Molecules = signal, ScatterRate = 200, DarkRate = 20 }.Make(200, 40, new Random(3));
    }

    static Setup OneMetre(EmissionProfile emission) => TestSetups.OneMetre(emission, 100, null) with { Probe = new Probe { Width = new(1e-3), ScatteringRate = new(1e5) } };

    /// <summary>The same signal with the pulse known, and with nothing known but that it is no longer than 5 ms: the velocity is then open by tens
    /// of m/s, and no number is given.</summary>
    [Fact]
    public void Fit_UnknownPulse_IsNotDeterminedAndSaysHowMuchIsOpen()
    {
        var pulse = new ExponentialEmission { Tail = new(1e-3) };
        BinnedRun run = Run(OneMetre(pulse));
        SpectrumOutcome known = RunAnalysis.Fit(run, "arrival", OneMetre(pulse), Settings).Single();
        Assert.InRange(known.Mean.Value, 149.2 - 4 * known.Mean.Total, 149.2 + 4 * known.Mean.Total);
        Assert.InRange(known.Mean.Total, 0, 1.5);
        SpectrumOutcome open = RunAnalysis.Fit(run, "arrival", OneMetre(new UnknownEmission { Longest = new(5e-3) }), Settings).Single();
        Assert.True(double.IsNaN(open.Number.Value) && double.IsNaN(open.Mean.Value) && open.Below.Interval is null);
        string because = open.Mean.NotDeterminedBecause!;
        Assert.Contains("emission pulse is unknown", because, StringComparison.Ordinal);
        string[] range = because.Split("mean velocities of ")[1].Split(" m/s")[0].Split(" to ");
        double low = double.Parse(range[0], System.Globalization.CultureInfo.InvariantCulture), high = double.Parse(range[1], System.Globalization.CultureInfo.InvariantCulture);
        Assert.InRange(149.2, low - 2, high + 2);
        Assert.True(high - low > 5 * known.Mean.Total, because);
    }

    /// <summary>A cause that moves both numbers by the same share does not move their ratio.</summary>
    [Fact]
    public void Ratio_CommonCause_Cancels()
    {
        Quantity a = Quantity.Of(600, 12, [new("efficiency", 60), new("flight length", 6)]), b = Quantity.Of(1000, 10, [new("efficiency", 100), new("flight length", -10)]);
        Quantity ratio = ConditionRatios.Ratio(a, b);
        Assert.Equal(0.6, ratio.Value, 12);
        Assert.Equal(0.6 * Math.Sqrt(0.02 * 0.02 + 0.01 * 0.01), ratio.Statistical, 12);
        Assert.Equal(0, ratio.Budget.Single(l => l.Cause == "efficiency").Shift, 12);
        Assert.Equal(0.012, ratio.Budget.Single(l => l.Cause == "flight length").Shift, 12);
        Assert.NotNull(ConditionRatios.Ratio(a, Quantity.Of(1, 0.9, [])).NotDeterminedBecause);
    }
}
