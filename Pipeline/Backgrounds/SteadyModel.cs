using Pipeline.Reduction;
using Pipeline.Statistics;

namespace Pipeline.Backgrounds;

/// <summary>The curve of <see cref="SteadyBackground"/>: dark + scatter + flash, with analytic derivatives.</summary>
static class SteadyModel
{
    /// <summary>Dark rate (1/s); scatter rate (1/s for one monitor unit); flash counts (for one monitor unit) and log decay time;
    /// second flash counts and log ratio of its decay time to the first.</summary>
    public const int Dark = 0, Scatter = 1, FirstFlash = 2, LogTime = 3, SecondFlash = 4, LogRatio = 5, Parameters = 6;

    public static readonly string[] Names = ["dark rate", "scatter rate", "flash counts", "flash time", "second flash counts", "second flash time"];

    /// <summary>Share of the narrowest bin below which a decay cannot be told from an instant.</summary>
    const double ShortestDecay = 0.2;

    /// <param name="data">The run.</param>
    /// <param name="exponentials">1 or 2.</param>
    public static (double[] Low, double[] High) Bounds(SteadyData data, int exponentials)
    {
        bool flash = data.Flash is not null;
        double shortest = Math.Min(1e-3, Math.Max(1e-6, ShortestDecay * Enumerable.Range(0, data.Axis.TimeBins).Min(data.Axis.WidthSeconds)));
        return ([0, 0, 0, Math.Log(shortest), 0, Math.Log(3)],
            [data.SeparatesDark ? 1e12 : 0, 1e12, flash ? 1e9 : 0, Math.Log(0.1), flash && exponentials == 2 ? 1e9 : 0, Math.Log(300)]);
    }

    public static IEnumerable<double[]> StartsWithOne(SteadyData data)
    {
        (double dark, double scatter) = data.StartRates();
        double counts = data.FlashCounts();
        foreach (double time in data.Flash is null ? (double[])[1e-4] : [5e-5, 8e-4])
            yield return [dark, scatter, counts, Math.Log(time), 0, Math.Log(10)];
    }

    /// <summary>Splits the one exponential into a fast and a slow one.</summary>
    public static IEnumerable<double[]> StartsWithTwo(double[] one)
    {
        yield return [one[Dark], one[Scatter], 0.8 * one[FirstFlash], one[LogTime] - 0.3, 0.2 * one[FirstFlash], Math.Log(10)];
        yield return [one[Dark], one[Scatter], 0.5 * one[FirstFlash], one[LogTime] - 1.5, 0.5 * one[FirstFlash], Math.Log(5)];
    }

    /// <summary>Means of <see cref="SteadyData.Counts"/>.</summary>
    public static MeanFunction Means(SteadyData data) => (x, means, slopes) =>
    {
        if (!slopes.IsEmpty) slopes.Clear();
        for (int i = 0; i < data.Cells.Count; i++)
            means[i] = Cell(data.Cells[i], x, slopes.IsEmpty ? [] : slopes.Slice(i * Parameters, Parameters));
    };

    /// <summary>The background under the signal.</summary>
    /// <param name="data">The run.</param>
    /// <param name="x">Parameters.</param>
    /// <param name="means">[bins] to be filled.</param>
    /// <param name="slopes">[bins * Parameters] to be filled, or empty.</param>
    public static void Under(SteadyData data, ReadOnlySpan<double> x, Span<double> means, Span<double> slopes)
    {
        SignalAxis axis = data.Axis;
        for (int i = 0; i < axis.Bins; i++)
        {
            double exposure = data.Signal.Shots * data.Signal.Live[i];
            var cell = new SteadyCell(exposure * axis.WidthSeconds(i), exposure * axis.WidthSeconds(i) * data.SignalProbe,
                exposure * data.SignalAblation, axis.EdgeSeconds(i), axis.EdgeSeconds(i + 1));
            means[i] = Cell(cell, x, slopes.IsEmpty ? [] : slopes.Slice(i * Parameters, Parameters));
        }
    }

    static double Cell(SteadyCell cell, ReadOnlySpan<double> x, Span<double> slopes)
    {
        double mean = cell.DarkExposure * x[Dark] + cell.ScatterExposure * x[Scatter];
        if (!slopes.IsEmpty) (slopes[Dark], slopes[Scatter]) = (cell.DarkExposure, cell.ScatterExposure);
        if (cell.FlashExposure == 0 || cell.To <= 0) return mean;
        double first = Math.Exp(x[LogTime]), second = first * Math.Exp(x[LogRatio]);
        (double share1, double slope1) = Share(cell, first);
        (double share2, double slope2) = Share(cell, second);
        if (!slopes.IsEmpty)
        {
            slopes[FirstFlash] = cell.FlashExposure * share1;
            slopes[SecondFlash] = cell.FlashExposure * share2;
            slopes[LogTime] = cell.FlashExposure * (x[FirstFlash] * slope1 + x[SecondFlash] * slope2);
            slopes[LogRatio] = cell.FlashExposure * x[SecondFlash] * slope2;
        }
        return mean + cell.FlashExposure * (x[FirstFlash] * share1 + x[SecondFlash] * share2);
    }

    /// <summary>Share of an exponential pulse in the cell, and its derivative with respect to the log of the decay time.</summary>
    static (double Share, double Slope) Share(SteadyCell cell, double time)
    {
        double from = Math.Max(cell.From, 0) / time, to = cell.To / time, a = Math.Exp(-from), b = Math.Exp(-to);
        return (a - b, from * a - to * b);
    }
}
