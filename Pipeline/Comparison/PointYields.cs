using Pipeline.Apparatus;
using Pipeline.Fitting;

namespace Pipeline.Comparison;

/// <summary>The yield of each point of a scan scatters by itself: points are different shots.</summary>
static class PointYields
{
    /// <summary>Relative standard deviation of a point's mean yield, beyond counting and beyond what the ablation monitor tells.</summary>
    /// <remarks>What is stated for the monitor, over the square root of the shots of a point. Where nothing is stated, from the scatter of the
    /// run: a scatter e, equal for all points, moves the sum of their signals S by e sqrt(sum S^2). That alone would not do, for where background
    /// outweighs molecules it is mostly its own error: in made-up scans with 4 % of scatter at a point it came out as 37 % and 51 %.</remarks>
    public static double Scatter(SpectrumOutcome outcome, double[] perShot, int timeBins, Detector detector)
    {
        double[] points = [.. perShot.Chunk(timeBins).Select(times => times.Sum())];
        return detector.AblationMonitorNoise > 0 ? detector.AblationMonitorNoise / Math.Sqrt(outcome.Signal.Shots / points.Length)
            : outcome.YieldScatter * points.Sum() / Math.Sqrt(points.Sum(s => s * s));
    }

    /// <summary>[points][bins] what one standard deviation of each point's yield moves.</summary>
    public static IEnumerable<double[]> Of(FitWindow window, double[] perShot, int timeBins, double scatter)
    {
        for (int p = 0; p < perShot.Length / timeBins && scatter > 0; p++)
        {
            var moved = new double[window.Count];
            for (int i = p * timeBins; i < (p + 1) * timeBins; i++) moved[i] = scatter * window.Exposure[i] * perShot[i];
            yield return moved;
        }
    }
}
