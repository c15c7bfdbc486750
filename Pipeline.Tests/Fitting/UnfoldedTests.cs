using MathNet.Numerics.Integration;
using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Fitting;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Fitting;

public class UnfoldedTests
{
    /// <summary>A measured background adds variance to every bin; the steps and what they minimise must agree on it.</summary>
    [Fact]
    public void Fit_CountsOnAMeasuredBackground_Converges()
    {
        var grid = new VelocityGrid(20, 300, 4);
        Setup setup = TestSetups.OneMetre(new ExponentialEmission { Delay = new(1e-4), Tail = new(5e-5) }, 20, null);
        var random = new MathNet.Numerics.Random.Xoshiro256StarStar(5, threadSafe: false);
        ResponseMatrix response = new ArrivalResponse().Build(setup, "off", new MadeUpRun().Axis, grid);
        double[] beam = [.. Enumerable.Range(0, grid.Cells).Select(c => GaussLegendreRule.Integrate(v => v * v * v * Math.Exp(-Math.Pow((v - 140) / 30, 2)), grid.Edge(c), grid.Edge(c + 1), 5))];
        double[] molecules = response.Fold([.. beam.Select(b => 800 * b / beam.Sum())]);
        for (int k = 0; k < 5; k++)
        {
            NetSignal signal = BackgroundModels.Named("templates").Subtract(new MadeUpRun { Molecules = molecules }.Make(60, 6, random), "off", setup.Detector);
            Assert.Contains(signal.BackgroundVariance, v => v > 0);
            Assert.Null(SpectrumEstimators.Named("unfolded").Fit(new FitWindow(signal, 1.5e-3, null), response).Doubt);
        }
    }
}
