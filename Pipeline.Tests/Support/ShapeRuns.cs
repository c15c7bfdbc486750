using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Fitting;
using Pipeline.Reduction;
using Pipeline.Response;

namespace Pipeline.Tests.Support;

/// <summary>Windows with counts from given molecules on a known background: one metre of free flight, every cell seen.</summary>
static class ShapeRuns
{
    const double Shots = 200, BackgroundEach = 5;

    public static VelocityGrid Grid { get; } = new(28, 300, 4);

    static readonly SignalAxis Axis = new MadeUpRun().Axis;

    public static ResponseMatrix Response { get; } = new ArrivalResponse().Build(
        TestSetups.OneMetre(new ExponentialGaussianEmission { Delay = new(1e-4), Width = new(2e-5), Tail = new(5e-5) }, 20, null), "off", Axis, Grid);

    /// <summary>Expected counts.</summary>
    public static FitWindow Expected(double[] molecules) => Window(Means(molecules));

    /// <summary>Poisson draws of them.</summary>
    public static FitWindow Drawn(double[] molecules, int seed)
    {
        var random = new MathNet.Numerics.Random.Xoshiro256StarStar(seed, threadSafe: false);
        return Window([.. Means(molecules).Select(m => (double)MathNet.Numerics.Distributions.Poisson.Sample(random, m))]);
    }

    /// <summary>[cells] a beam v^3 exp(-((v - u)/alpha)^2).</summary>
    public static double[] Beam(double number, double u, double alpha)
    {
        var molecules = new double[Grid.Cells];
        new SupersonicFamily(Grid, 3).Fill([number, u, alpha], molecules, [new double[Grid.Cells], new double[Grid.Cells], new double[Grid.Cells]]);
        return molecules;
    }

    static double[] Means(double[] molecules) => [.. Response.Fold(molecules).Select(m => Shots * m + BackgroundEach)];

    static FitWindow Window(double[] totals) => new(new NetSignal
    {
        Axis = Axis, Condition = "off", DetectorKind = DetectorKind.Counting, Shots = Shots, Total = totals, Live = [.. Enumerable.Repeat(1.0, Axis.Bins)],
        Background = [.. Enumerable.Repeat(BackgroundEach, Axis.Bins)], BackgroundVariance = new double[Axis.Bins], Causes = [],
    }, 1.5e-3, null);
}
