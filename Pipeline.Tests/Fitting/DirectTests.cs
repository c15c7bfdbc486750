using MathNet.Numerics.Integration;
using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Fitting;
using Pipeline.Reduction;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Fitting;

public class DirectTests
{
    static readonly VelocityGrid Grid = new(10, 330, 1);

    /// <summary>u 140, alpha 30 m/s.</summary>
    static double[] Beam()
    {
        static double Flux(double v) => v * v * v * Math.Exp(-Math.Pow((v - 140) / 30, 2));
        double[] cells = [.. Enumerable.Range(0, Grid.Cells).Select(c => GaussLegendreRule.Integrate(Flux, Grid.Edge(c), Grid.Edge(c + 1), 5))];
        return [.. cells.Select(c => 1000 * c / cells.Sum())];
    }

    /// <summary>A weak probe: counts go with the density, 1/v for each molecule.</summary>
    static Setup Density(EmissionProfile pulse) => TestSetups.OneMetre(pulse, 20, null);

    /// <summary>What a pulse does to arrival times that are read as if all molecules left at the trigger: mean and spread over one metre,
    /// recomputed independently by two integrations (no published source).</summary>
    [Theory]
    [InlineData(0, 149.23, 20.56)]
    [InlineData(0.5e-3, 139.74, 20.15)]
    [InlineData(1e-3, 132.83, 21.68)]
    [InlineData(2e-3, 122.97, 24.96)]
    [InlineData(5e-3, 106.18, 30.90)]
    public void Transform_PulseReadAsInstant_MovesMeanAndSpreadAsKnown(double tail, double mean, double spread)
    {
        var axis = new SignalAxis(0, 1e-5, [.. Enumerable.Range(0, 10_001)]);
        EmissionProfile pulse = tail == 0 ? new InstantEmission() : new ExponentialEmission { Tail = new(tail) };
        double[] signal = new ArrivalResponse().Build(Density(pulse), "off", axis, Grid).Fold(Beam());
        var window = new FitWindow(Net(axis, signal), 0, null);
        SpectrumMoments found = SpectrumMoments.Of(Grid, DirectEstimator.Transform(window, new ArrivalResponse().Build(Density(new InstantEmission()), "off", axis, Grid), UnfoldedEstimator.Net(window)));
        // bins of 10 us, cells of 1 m/s
        Assert.Equal(mean, found.Mean, 0.02);
        Assert.Equal(spread, found.Spread, 0.02);
    }

    [Fact]
    public void Fit_ShortPulse_IsOfferedWithItsBias()
    {
        FittedSpectrum fit = FitOf(new ExponentialEmission { Tail = new(50e-6) });
        Assert.Null(fit.Refusal);
        Assert.Equal(149.23, fit.Moments.Mean, 0.1);
        Assert.Contains("its spread by +0.0", fit.Description, StringComparison.Ordinal);
    }

    [Fact]
    public void Fit_LongPulse_IsRefusedWithItsBias() =>
        Assert.Contains("arrival time cannot be read as velocity", FitOf(new ExponentialEmission { Tail = new(2e-3) }).Refusal, StringComparison.Ordinal);

    static FittedSpectrum FitOf(EmissionProfile pulse)
    {
        var axis = new SignalAxis(0, 2e-5, [.. Enumerable.Range(0, 5001)]);
        ResponseMatrix response = new ArrivalResponse().Build(Density(pulse), "off", axis, Grid);
        return SpectrumEstimators.Named("direct").Fit(new FitWindow(Net(axis, response.Fold(Beam())), 0, null), response);
    }

    static NetSignal Net(SignalAxis axis, double[] signal) => new()
    {
        Axis = axis, Condition = "off", DetectorKind = DetectorKind.Counting, Shots = 1, Total = signal, Live = [.. signal.Select(_ => 1.0)],
        Background = new double[signal.Length], BackgroundVariance = new double[signal.Length], Causes = [],
    };
}
